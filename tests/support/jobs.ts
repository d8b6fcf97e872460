/** A job that is cut in a few seconds and still has walls to measure: a 0.5 mm hole, 0.16 mm deep, in borosilicate glass. */
export const smallJob = {
  spallwright: 1,
  title: 'Small hole',
  workpiece: { material: 'borosilicate_33', thicknessMm: 3 },
  cavity: { outline: { kind: 'circle', diameterMm: 0.5 }, depthMm: 0.16 },
  machine: { amplitudeUm: 18, staticLoadN: 0.03, lateralRunoutUm: 0.5 },
  slurry: { abrasive: 'b4c', grit: 'F320' },
  cut: { quality: 'preview', seed: 3 },
};

/** The small job as the text of its file, with what a test changes in it. */
export function smallJobText(changes: Record<string, unknown> = {}): string {
  return JSON.stringify({ ...smallJob, ...changes }, null, 2);
}

/** The small job at another depth (mm). */
export function shallowJobText(depthMm: number): string {
  return smallJobText({ cavity: { ...smallJob.cavity, depthMm } });
}
