import { expect, test } from 'vitest';
import { contactsOf } from '#src/planning/stages.ts';

const circle = (diameter: number) => ({ kind: 'circle', diameter }) as const;
const disc = (diameter: number) => (Math.PI * diameter * diameter) / 4;

test('a flat tool in untouched work cuts with its whole face all the way', () => {
  const contacts = contactsOf({ tool: circle(4e-3), face: { kind: 'flat' }, depth: 2e-3 });
  expect(contacts).toEqual([{ from: 0, to: 2e-3, area: expect.closeTo(disc(4e-3), 12), whole: true }]);
});

test('a finishing tool cuts the shelf the roughing pass left, then the whole floor', () => {
  const earlier = { outline: circle(3.8e-3), depth: 1.9e-3 };
  const contacts = contactsOf({ tool: circle(4e-3), face: { kind: 'flat' }, depth: 2e-3, earlier });
  expect(contacts.map(({ from, to }) => [from, to])).toEqual([
    [0, 1.9e-3],
    [1.9e-3, 2e-3],
  ]);
  // the shelf is a ring of 0.1 mm; cells of 25 um give it to 1 %
  expect((contacts[0]?.area ?? 0) / (disc(4e-3) - disc(3.8e-3))).toBeCloseTo(1, 2);
  expect(contacts[1]?.whole).toBe(true);
});

test('a finishing tool narrower than the roughed cavity goes down to its floor without cutting', () => {
  const earlier = { outline: circle(4.1e-3), depth: 1.9e-3 };
  const contacts = contactsOf({ tool: circle(4e-3), face: { kind: 'flat' }, depth: 2e-3, earlier });
  expect(contacts.map(({ from, to }) => [from, to])).toEqual([[1.9e-3, 2e-3]]);
});

test('the area of a cone in contact grows with the square of the depth', () => {
  const contacts = contactsOf({ tool: circle(4e-3), face: { kind: 'cone', angle: Math.PI / 2 }, depth: 1e-3 });
  for (const { from, to, area } of contacts.slice(1)) {
    const radius = (from + to) / 2;
    expect(area / (Math.PI * radius * radius)).toBeCloseTo(1, 1);
  }
  expect(contacts.every(({ whole }) => !whole)).toBe(true);
});

test('a stepped tool cuts with its pilot, then with pilot and shoulder', () => {
  const face = { kind: 'stepped', pilot: circle(2e-3), step: 1e-3 } as const;
  const contacts = contactsOf({ tool: circle(4e-3), face, depth: 3e-3 });
  expect(contacts.map(({ from, to }) => [from, to])).toEqual([
    [0, 1e-3],
    [1e-3, 3e-3],
  ]);
  expect((contacts[0]?.area ?? 0) / disc(2e-3)).toBeCloseTo(1, 1);
  expect((contacts[1]?.area ?? 0) / disc(4e-3)).toBeCloseTo(1, 6);
});
