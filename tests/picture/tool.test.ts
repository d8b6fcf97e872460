import { expect, test } from 'vitest';
import { makeOutline } from '#src/base/outline.ts';
import { nominalLines, recessProfiles, sideAt, type ToolOutline, toolParts, toolProfiles } from '#src/picture/tool.ts';

const MM = 1e-3;
const DISC = makeOutline({ kind: 'circle', diameter: 2 * MM });
const TOP = -0.2 * MM;

function tool(more: Partial<ToolOutline> = {}): ToolOutline {
  return { width: 2 * MM, centre: 0, faceDepth: MM, edgeRadius: 0, worn: 0, newEdgeRadius: 0, ...more };
}

const heights = (line: ArrayLike<number>): number[] => Array.from(line).filter((_, n) => n % 2 === 1);

/** Area enclosed by a profile and the line that closes it (m2), by the shoelace formula. */
function areaOf(line: ArrayLike<number>): number {
  let sum = 0;
  for (let n = 0; n < line.length; n += 2) {
    const m = (n + 2) % line.length;
    sum += (line[n] as number) * (line[m + 1] as number) - (line[m] as number) * (line[n + 1] as number);
  }
  return Math.abs(sum) / 2;
}

// Eight chords a quarter circle: the sector keeps sin(pi / 16) / (pi / 16) of its area at least, 0.65 % of r^2 pi / 4.
test('a flat tool with rounded edges has the area of a rectangle less r^2 (2 - pi / 2)', () => {
  const radius = 0.3 * MM;
  const [profile] = toolProfiles(tool({ edgeRadius: radius }), TOP) as [Float64Array];
  const wanted = 2 * MM * 1.2 * MM - radius * radius * (2 - Math.PI / 2);
  expect(Math.abs(areaOf(profile) - wanted)).toBeLessThan(0.0065 * 2 * radius * radius);
});

test('the new tool reaches deeper by what has been lost', () => {
  const worn = tool({ worn: 0.05 * MM });
  expect(Math.max(...heights(toolProfiles(worn, TOP)[0] as Float64Array))).toBeCloseTo(MM, 12);
  expect(Math.max(...heights(toolProfiles(worn, TOP, 'new')[0] as Float64Array))).toBeCloseTo(1.05 * MM, 12);
});

test('a side that has lost w stands w inside the new one at the face, and less further up where the loss decays', () => {
  const loss = 0.02 * MM;
  const decay = 0.3 * MM;
  const [profile] = toolProfiles(tool({ sideLoss: loss, sideDecay: decay }), TOP) as [Float64Array];
  expect(sideAt(profile, MM, 'right')).toBeCloseTo(MM - loss, 12);
  const top = profile[profile.length - 2] as number;
  expect(top).toBeCloseTo(MM - loss * Math.exp(-(1.2 * MM) / decay), 12);
  for (const z of [0, 0.5 * MM]) {
    expect(sideAt(profile, z, 'left')).toBeCloseTo(-sideAt(profile, z, 'right'), 12);
  }
});

test('a cone comes to its tip on its axis and leaves the entry face at depth tan(angle / 2) either side', () => {
  const parts = toolParts(DISC, { kind: 'cone', angle: Math.PI / 3 }, 0);
  const [profile] = toolProfiles(tool({ parts, faceDepth: MM }), 0) as [Float64Array];
  const tip = heights(profile).indexOf(Math.max(...heights(profile)));
  expect(profile[2 * tip]).toBeCloseTo(0, 12);
  expect(profile[2 * tip + 1]).toBeCloseTo(MM, 12);
  const half = MM * Math.tan(Math.PI / 6);
  expect(sideAt(profile, 0, 'right')).toBeCloseTo(half, 12);
  expect(sideAt(profile, 0.5 * MM, 'left')).toBeCloseTo(-half / 2, 12);
});

test('a ball of the radius of its tool is half a circle', () => {
  const parts = toolParts(DISC, { kind: 'sphere', radius: MM }, 0);
  const [profile] = toolProfiles(tool({ parts, faceDepth: 2 * MM }), 0) as [Float64Array];
  for (let n = 2; n + 2 < profile.length; n += 2) {
    const [x, z] = [profile[n], profile[n + 1]] as [number, number];
    expect(Math.abs(Math.hypot(x, z - MM) - MM)).toBeLessThan(1e-6 * MM);
  }
});

test('a pilot runs ahead of its shoulder by the step, with an edge of its own', () => {
  const step = 0.4 * MM;
  const radius = 0.1 * MM;
  const parts = toolParts(DISC, { kind: 'stepped', pilot: { kind: 'circle', diameter: MM }, step }, 0);
  const [profile] = toolProfiles(tool({ parts, edgeRadius: radius }), TOP) as [Float64Array];
  expect(sideAt(profile, MM - step / 2, 'right')).toBeCloseTo(MM / 2, 7);
  expect(sideAt(profile, 0, 'right')).toBeCloseTo(MM, 7);
  const corners = 4 * radius * radius * (1 - Math.PI / 4);
  const wanted = 2 * MM * (1.2 * MM - step) + MM * step - corners;
  expect(Math.abs(areaOf(profile) - wanted)).toBeLessThan(0.0065 * 4 * radius * radius);
});

test('a bore cuts the tool in two, with no rounded edge towards it', () => {
  const bore = { x: 0.2 * MM, y: 0, radius: 0.1 * MM };
  const parts = toolParts(DISC, { kind: 'flat' }, 0, [bore]);
  expect(parts.length).toBe(2);
  const [left, right] = toolProfiles(tool({ parts, edgeRadius: 0.05 * MM }), TOP) as [Float64Array, Float64Array];
  expect(sideAt(left, MM, 'right')).toBeCloseTo(0.1 * MM, 7);
  expect(sideAt(right, MM, 'left')).toBeCloseTo(0.3 * MM, 7);
});

test('a tool leaves its own form in a backing: as deep as it went, as wide as it is', () => {
  const [recess] = recessProfiles(tool(), 2 * MM, 0.1 * MM) as [Float64Array];
  expect(Math.min(...heights(recess))).toBeCloseTo(2 * MM, 12);
  expect(areaOf(recess)).toBeCloseTo(2 * MM * 0.1 * MM, 12);
  expect(recessProfiles(tool(), 2 * MM, 0)).toEqual([]);
});

test('the drawing of a hole through a plate is its two walls', () => {
  const lines = nominalLines(toolParts(DISC, { kind: 'flat' }, 0), 3 * MM, 2 * MM);
  expect(lines.length).toBe(2);
  lines.forEach((line, n) => {
    expect(Math.max(...heights(line))).toBeCloseTo(2 * MM, 12);
    const xs = line.filter((_, k) => k % 2 === 0);
    for (const x of xs) expect(x).toBeCloseTo(n === 0 ? -MM : MM, 7);
  });
});
