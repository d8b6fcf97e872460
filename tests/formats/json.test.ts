import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { pathText, readJson } from '#src/formats/json.ts';
import { editDistance, nearestName } from '#src/formats/nearest.ts';

const parsed = (text: string) => {
  const read = readJson(text);
  if ('fault' in read) throw new Error(read.fault.message);
  return read.value;
};
const faultOf = (text: string) => {
  const read = readJson(text);
  if (!('fault' in read)) throw new Error('no fault');
  return read.fault;
};

describe('reading JSON', () => {
  test('gives what JSON.parse gives, for every value and every spacing', () => {
    fc.assert(
      fc.property(fc.jsonValue(), fc.nat(4), (value, indent) => {
        const text = JSON.stringify(value, null, indent);
        expect(JSON.stringify(parsed(text))).toBe(JSON.stringify(JSON.parse(text)));
      }),
      { seed: 21, numRuns: 400 },
    );
  });

  test('accepts a text exactly when JSON.parse does', () => {
    fc.assert(
      fc.property(
        fc.json(),
        fc.nat(),
        fc.constantFrom('', ',', '"', '}', '0', '.', '-', 'e', '\\', '\n', '['),
        (text, at, by) => {
          const place = at % (text.length + 1);
          const spoilt = text.slice(0, place) + by + text.slice(place + 1);
          let accepted = true;
          try {
            JSON.parse(spoilt);
          } catch {
            accepted = false;
          }
          expect('fault' in readJson(spoilt)).toBe(!accepted);
        },
      ),
      { seed: 22, numRuns: 1000 },
    );
  });

  test.each([
    ['{\n  "a": NaN\n}', 2, 8, /NaN is not a number a file may hold/],
    ['[-Infinity]', 1, 2, /-Infinity is not a number/],
    ['{"a": 1\n "b": 2}', 2, 2, /a comma or } is expected/],
    ['{"a": 1,}', 1, 9, /comma before this bracket has to go/],
    ['{"a": 1,5}', 1, 9, /decimals are written with a point/],
    ["{'a': 1}", 1, 2, /field name in double quotes/],
    ['{"a" 1}', 1, 6, /colon is expected/],
    ['{"a": "x', 1, 7, /closing quote of this text is missing/],
    ['{"a": 0x10}', 1, 7, /"0x10" is not a number/],
    ['{"a": "\\q"}', 1, 7, /backslash sequence/],
    ['{} {}', 1, 4, /follows after the end/],
    ['', 1, 1, /value is expected here, not the end of the file/],
  ])('%j is refused at its line and column with what is wrong', (text, line, column, message) => {
    const fault = faultOf(text);
    expect([fault.line, fault.column]).toEqual([line, column]);
    expect(fault.message).toMatch(message);
  });

  test('keeps the place of every field, and names those given twice', () => {
    const read = readJson('{\n "a": {"b": [1,\n 2]},\n "a": 3 }');
    if ('fault' in read) throw new Error(read.fault.message);
    expect(read.places.get('a.b[1]')).toEqual({ line: 3, column: 2 });
    expect(read.places.get('a')).toEqual({ line: 4, column: 2 });
    expect(read.repeated).toEqual([{ path: 'a', value: 3 }]);
    expect(read.value).toEqual({ a: 3 });
  });

  test('makes a field of any name an own field', () => {
    const value = parsed('{"__proto__": {"polluted": 1}}') as object;
    expect(Object.getPrototypeOf(value)).toBe(Object.prototype);
    expect(Object.hasOwn(value, '__proto__')).toBe(true);
    expect('polluted' in {}).toBe(false);
  });

  test('skips a byte order mark', () => {
    expect(parsed('\ufeff{"a":1}')).toEqual({ a: 1 });
  });
});

test('a path is written with points, numbers in brackets and odd names in quotes', () => {
  expect(pathText(['passes', 0, 'depthMm'])).toBe('passes[0].depthMm');
  expect(pathText(['a b', 'c'])).toBe('["a b"].c');
  expect(pathText([])).toBe('');
});

describe('edit distance', () => {
  const word = fc.string({ maxLength: 8 });

  test('is a metric: zero for equals only, symmetric, and no detour is shorter', () => {
    fc.assert(
      fc.property(word, word, word, (a, b, c) => {
        expect(editDistance(a, b) === 0).toBe(a === b);
        expect(editDistance(a, b)).toBe(editDistance(b, a));
        expect(editDistance(a, c)).toBeLessThanOrEqual(editDistance(a, b) + editDistance(b, c));
      }),
      { seed: 23 },
    );
  });

  // The textbook pair: two replacements and one insertion.
  test('from kitten to sitting is 3', () => {
    expect(editDistance('kitten', 'sitting')).toBe(3);
  });

  test('finds the nearest name, a beginning before a misspelling, and none for what is like none', () => {
    expect(nearestName('amplitude', ['latitude', 'amplitudeUm'])).toBe('amplitudeUm');
    expect(nearestName('thicknesMm', ['lengthMm', 'thicknessMm'])).toBe('thicknessMm');
    expect(nearestName('colour', ['depthMm', 'note'])).toBeUndefined();
    expect(nearestName('', ['depthMm'])).toBeUndefined();
  });
});
