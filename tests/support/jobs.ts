/** A job small enough to be cut in about a second: a 1 mm hole, 0.05 mm deep, in borosilicate glass. */
export const smallJob = {
  spallwright: 1,
  title: 'Small hole',
  workpiece: { material: 'borosilicate_33', thicknessMm: 3 },
  cavity: { outline: { kind: 'circle', diameterMm: 1 }, depthMm: 0.05 },
  machine: { amplitudeUm: 18, staticLoadN: 0.1 },
  slurry: { abrasive: 'b4c', grit: 'F400' },
  cut: { quality: 'preview', seed: 3 },
};

/** The small job as the text of its file, with what a test changes in it. */
export function smallJobText(changes: Record<string, unknown> = {}): string {
  return JSON.stringify({ ...smallJob, ...changes });
}
