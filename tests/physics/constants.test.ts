import { expect, test } from 'vitest';
import { constantNotes, type ProcessConstants, publishedConstants } from '#src/physics/constants.ts';
import { type SlurryConstants, slurryConstants, slurryNotes } from '#src/physics/process/constants.ts';

test('every process constant lies in its plausible range and says where it comes from', () => {
  for (const [name, note] of Object.entries(constantNotes)) {
    const value = publishedConstants[name as keyof ProcessConstants];
    expect(value, name).toBeGreaterThanOrEqual(note.min);
    expect(value, name).toBeLessThanOrEqual(note.max);
    expect(note.source.length, name).toBeGreaterThan(0);
  }
  expect(Object.keys(constantNotes).sort()).toEqual(Object.keys(publishedConstants).sort());
});

test('every constant of the slurry lies in its plausible range and says where it comes from', () => {
  for (const [name, note] of Object.entries(slurryNotes)) {
    const value = slurryConstants[name as keyof SlurryConstants];
    expect(value, name).toBeGreaterThanOrEqual(note.min);
    expect(value, name).toBeLessThanOrEqual(note.max);
    expect(note.source.length, name).toBeGreaterThan(0);
  }
  expect(Object.keys(slurryNotes).sort()).toEqual(Object.keys(slurryConstants).sort());
});
