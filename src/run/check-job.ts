import { openJob, takenDefaults } from './jobs.ts';
import type { JobRequest, Refused, SoundJob } from './protocol.ts';

/** Checks a job and says what its defaults came to. */
export function checkJob(request: JobRequest): SoundJob | Refused {
  const opened = openJob(request);
  if (opened.state === 'refused') return opened;
  const { job, warnings } = opened;
  return { state: 'sound', warnings, defaults: takenDefaults(job), notes: job.notes };
}
