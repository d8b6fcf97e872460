import { createHash } from 'node:crypto';
import { describe, expect, test } from 'vitest';
import {
  abrasiveOf,
  findGrade,
  findMaterial,
  type GritRecord,
  gritSizesOf,
  type Library,
  loadLibrary,
  type Property,
  toolMaterialOf,
  workMaterialOf,
} from '#src/formats/library.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { smallCrackToughness, type ToughnessClass } from '#src/physics/toughness.ts';
import abrasives from '../../resources/abrasives.json' with { type: 'json' };
import grits from '../../resources/grits.json' with { type: 'json' };
import materials from '../../resources/materials.json' with { type: 'json' };
import tools from '../../resources/tool-materials.json' with { type: 'json' };

const sha = (lines: string[]) => createHash('sha256').update(lines.toSorted().join('\n')).digest('hex');

/** Names of the properties in the collection the libraries were made from. */
const SHORT: Record<string, string> = {
  youngsModulusGPa: 'E',
  poisson: 'nu',
  hardnessGPa: 'HV',
  toughnessMPaSqrtM: 'KIc',
  densityKgM3: 'rho',
  strengthMPa: 'sigma_f',
  edgeToughnessNPerMm: 'Te',
  tensileStrengthMPa: 'UTS',
  fatigueStrengthMPa: 'sigma_fat',
  knoopHardnessGPa: 'HK',
  crushStrengthMPa: 'sigma_crush_100um',
  crushSizeExponent: 'size_exponent',
  crushWeibull: 'weibull_m',
};

function propertyLines(category: string, records: readonly { id: string; properties: object }[]): string[] {
  return records.flatMap(({ id, properties }) =>
    Object.entries(properties as Record<string, Property>)
      .filter(([name]) => name in SHORT)
      .map(([name, p]) => [category, id, SHORT[name], p.nominal, p.min, p.max, p.status].join('|')),
  );
}

function gritLine(g: GritRecord): string {
  const s = g.sieves;
  const tolerance = g.d50Um.max === null ? null : Number((g.d50Um.max - g.d50Um.nominal).toPrecision(9));
  return [
    g.method,
    g.grade,
    g.largestUm,
    g.d3Um,
    g.d50Um.nominal,
    tolerance,
    g.lowFraction,
    g.lowUm,
    s?.sieve1Um,
    s?.sieve2Um,
    s?.sieve2MaxPercent,
    s?.sieve3Um,
    s?.sieve3MinPercent,
    s?.sieve4Um,
    s?.sieve34MinPercent,
    s?.sieve5Um,
    s?.sieve5MaxPercent,
    g.lognormal.medianUm,
    g.lognormal.spread,
    g.numberMedianUm,
    g.meanVolumeDiameterUm,
    g.sauterDiameterUm,
    g.rosinRammler?.exponent,
    g.rosinRammler?.size632Um,
  ].join('|');
}

function material(id: string) {
  const record = stockLibrary.materials.find((item) => item.id === id);
  if (!record) throw new Error(`no ${id}`);
  return record;
}

function grade(name: string, method?: GritRecord['method']): GritRecord {
  const { found } = findGrade(stockLibrary, name, method);
  if (!found) throw new Error(`no ${name}`);
  return found;
}

describe('the libraries', () => {
  test('hold 22 workpieces, 8 tools, 6 abrasives and 83 grit grades', () => {
    const { materials: work, tools: tool, abrasives: grain, grits: grit } = stockLibrary;
    expect([work.length, tool.length, grain.length, grit.length]).toEqual([22, 8, 6, 83]);
  });

  test('reproduce every one of the 250 property rows they were made from', () => {
    const lines = [
      ...propertyLines('workpiece', stockLibrary.materials),
      ...propertyLines('tool', stockLibrary.tools),
      ...propertyLines('abrasive', stockLibrary.abrasives),
    ];
    expect(lines).toHaveLength(22 * 7 + 8 * 6 + 6 * 8);
    expect(sha(lines)).toBe('9a254964890bdb9dd8153cec97c0380426fc57d6709e42fa9f26254558a49bc2');
  });

  test('reproduce every number of the 83 grit rows they were made from', () => {
    expect(sha(stockLibrary.grits.map(gritLine))).toBe(
      'a0a4f4d09347e0d1c35d7e6e4ff0a61bb529b4fe8f25e18e02d358da7dac7c0b',
    );
  });

  // FEPA 42-2 / ISO 8486-2 from memory, JIS R 6001:1987 as read, ISO 8486-1 sieves: the tables' own printed numbers.
  test('give F320, #400 and F100 as the standards print them', () => {
    expect(grade('F320').d50Um).toEqual({ nominal: 29.2, min: 29.2 - 1.5, max: 29.2 + 1.5 });
    expect(grade('F320').d3Um).toBe(49);
    expect(grade('#400')).toMatchObject({ largestUm: 75, d3Um: 58, d50Um: { nominal: 30 }, lowUm: 20 });
    expect(grade('F100').sieves).toMatchObject({
      sieve1Um: 212,
      sieve2Um: 150,
      sieve3Um: 125,
      sieve4Um: 106,
      sieve5Um: 75,
    });
  });

  // The spread is the width at which a log-normal just meets the coarse or the fine limit, whichever is narrower.
  test('have spreads that meet the limits of their grade: ln(d3/d50) / 1.8808 at most', () => {
    for (const g of stockLibrary.grits) {
      if (g.d3Um === null) continue;
      // the table rounds to four digits
      expect(g.lognormal.spread).toBeLessThanOrEqual((Math.log(g.d3Um / g.lognormal.medianUm) / 1.8808) * 1.001);
    }
  });

  test('name no maker: a source says "maker\'s data sheet" or gives a page, a standard or an author', () => {
    const text = JSON.stringify(stockLibrary);
    expect(text).not.toMatch(/scribd|studylib|piskovacka|fuchioka|corp\b|gmbh|\binc\b|\bltd\b/i);
  });
});

describe('small-crack toughness', () => {
  const kinds: Record<string, ToughnessClass> = { zirconia_3y: 'toughened-ceramic' };

  // Class rule of the physics layer; the rows are rounded to three digits, so within half a unit of the third.
  test('of every workpiece is its class rule at a boundary energy of 8 J/m2', () => {
    for (const record of stockLibrary.materials) {
      const kind = kinds[record.id] ?? (record.class as ToughnessClass);
      const { toughness, youngsModulus, smallCrackToughness: own } = workMaterialOf(record);
      const rule = smallCrackToughness(kind, toughness, youngsModulus);
      expect(Math.abs(own / rule - 1), record.id).toBeLessThan(0.005);
    }
  });

  test('is K_Ic for glass and single crystals and less for everything with grains', () => {
    for (const record of stockLibrary.materials) {
      const { smallCrackToughnessMPaSqrtM: small, toughnessMPaSqrtM: long } = record.properties;
      if (record.class === 'glass' || record.class === 'crystal') expect(small.nominal).toBe(long.nominal);
      else expect(small.nominal).toBeLessThan(long.nominal);
    }
  });

  // sqrt(8 J/m2 x 385 GPa) = 1.755 MPa sqrt(m); 4 and 16 J/m2 give its ends.
  test('of alumina is sqrt(8 E), from sqrt(4 E) to sqrt(16 E)', () => {
    const { nominal, min, max } = material('alumina_995').properties.smallCrackToughnessMPaSqrtM;
    expect(nominal).toBeCloseTo(Math.sqrt(8 * 385e9) / 1e6, 2);
    expect(min).toBeCloseTo(Math.sqrt(4 * 385e9) / 1e6, 2);
    expect(max).toBeCloseTo(Math.sqrt(16 * 385e9) / 1e6, 2);
  });
});

describe('records in SI', () => {
  test('of borosilicate: 64 GPa, 5.9 GPa, 0.77 MPa sqrt(m), 2230 kg/m3', () => {
    const work = workMaterialOf(material('borosilicate_33'));
    expect(work).toEqual({
      youngsModulus: 64e9,
      poisson: 0.2,
      hardness: 5.9 * 1e9,
      toughness: 0.77 * 1e6,
      smallCrackToughness: 0.77 * 1e6,
      density: 2230,
    });
  });

  test('carry the working strain of titanium and of no other tool', () => {
    const limits = stockLibrary.tools.map((record) => [record.id, toolMaterialOf(record).strainLimit] as const);
    expect(limits.filter(([, limit]) => limit !== undefined)).toEqual([['ti_6al_4v', 0.0025]]);
  });

  test('mark metals, which harden at work, and cemented carbide, which does not', () => {
    const metals = stockLibrary.tools.filter((record) => toolMaterialOf(record).metal).map((record) => record.id);
    expect(metals).toHaveLength(7);
    expect(metals).not.toContain('tungsten_carbide_tool');
  });

  test('of boron carbide grain: Knoop 28 GPa, 700 MPa at 100 um, exponent 0.55, Weibull 4', () => {
    const record = stockLibrary.abrasives.find((item) => item.id === 'b4c');
    expect(record && abrasiveOf(record)).toEqual({
      density: 2510,
      hardness: 28e9,
      crushStrength: 700e6,
      crushSizeExponent: 0.55,
      crushWeibull: 4,
    });
  });
});

describe('grades', () => {
  test('without a method mean the light table for F230 and finer, the sieves for F220 and coarser, resistance for #', () => {
    expect(grade('F230').method).toBe('photosedimentometer');
    expect(grade('F220').method).toBe('sieve');
    expect(grade('#240').method).toBe('electricalResistance');
  });

  test('take another table by its method', () => {
    expect(grade('F320', 'sedimentationTube').d50Um.nominal).toBe(32.8);
    expect(grade('#240', 'sedimentationTube').d50Um.nominal).toBe(60);
  });

  test('are found whatever their case and spaces', () => {
    expect(grade(' f 320 ').grade).toBe('F320');
  });

  test('have as largest grain the standard one, or 1.3 d3, or the sieve that all pass', () => {
    expect(gritSizesOf(grade('#400')).largest).toBeCloseTo(75e-6, 12);
    expect(gritSizesOf(grade('F320')).largest).toBeCloseTo(1.3 * 49e-6, 12);
    expect(gritSizesOf(grade('F100')).largest).toBeCloseTo(212e-6, 12);
    expect(gritSizesOf(grade('F320', 'sedimentationTube')).largest).toBeCloseTo(75e-6, 12);
  });

  test('that do not exist name the nearest in number, of the same family', () => {
    expect(findGrade(stockLibrary, 'F330')).toEqual({ nearest: 'F320' });
    expect(findGrade(stockLibrary, '#410')).toEqual({ nearest: '#400' });
    expect(findGrade(stockLibrary, '320')).toEqual({ nearest: 'F320' });
    expect(findGrade(stockLibrary, 'F99999')).toEqual({ nearest: 'F2000' });
    expect(findGrade(stockLibrary, 'toString')).toEqual({});
  });
});

describe('a material that does not exist', () => {
  test.each([
    ['borosilicate', 'borosilicate_33'],
    ['sodalime', 'soda_lime'],
    ['Fused Silica', 'fused_silica'],
    ['quarz', 'quartz'],
    ['silicon carbide, sintered', 'sic_sintered'],
  ])('%s names the nearest, %s', (asked, nearest) => {
    expect(findMaterial(stockLibrary.materials, asked)).toEqual({ nearest });
  });

  test('and is like none names none, also when an object inherits its name', () => {
    expect(findMaterial(stockLibrary.materials, 'zzzzzz')).toEqual({});
    expect(findMaterial(stockLibrary.materials, 'constructor')).toEqual({});
    expect(findMaterial(stockLibrary.materials, 'x'.repeat(100000))).toEqual({});
  });
});

describe('loading', () => {
  const files = { materials, tools, abrasives, grits };

  test('the same files twice gives equal libraries', () => {
    expect(loadLibrary(files)).toEqual(stockLibrary);
  });

  test.each<[string, (library: typeof files) => void]>([
    [
      'a property that is missing',
      (f) => Reflect.deleteProperty(f.materials.items[0]?.properties ?? {}, 'hardnessGPa'),
    ],
    [
      'a nominal value outside its range',
      (f) => Object.assign(f.tools.items[0]?.properties.poisson ?? {}, { nominal: 0.9 }),
    ],
    ['an unknown field', (f) => Object.assign(f.grits.items[0] ?? {}, { extra: 1 })],
    ['an id twice', (f) => Object.assign(f.abrasives.items[1] ?? {}, { id: f.abrasives.items[0]?.id })],
  ])('refuses %s', (_, spoil) => {
    const copy = structuredClone(files);
    spoil(copy);
    expect(() => loadLibrary(copy)).toThrow();
  });

  test('keeps every record of a library, whatever it holds', () => {
    const small: Library = loadLibrary({ ...files, grits: { ...grits, items: grits.items.slice(0, 1) } });
    expect(small.grits).toHaveLength(1);
  });
});
