import type { Problem } from '#src/formats/problems.ts';
import type { Result } from '#src/formats/result.ts';

/** A job as it comes: the text of its file, and what the command line or the window overrides. */
export interface JobRequest {
  readonly text: string;
  /** What the text is called in messages. */
  readonly source: string;
  readonly seed?: number;
  readonly quality?: 'preview' | 'standard' | 'fine';
  /** Files that stand beside the job, by the names it gives them: drawings and reliefs. */
  readonly attachments?: Readonly<Record<string, Uint8Array>>;
}

/** A job that is refused, with everything that is wrong with it. */
export interface Refused {
  readonly state: 'refused';
  readonly problems: readonly Problem[];
}

/** What became of one default. */
export interface TakenDefault {
  readonly path: string;
  /** In the unit of the path's name, or a word. */
  readonly value: string;
}

/** A job that holds. */
export interface SoundJob {
  readonly state: 'sound';
  readonly warnings: readonly Problem[];
  readonly defaults: readonly TakenDefault[];
  /** What was worked out for defaults that depend on the rest of the job, one sentence each. */
  readonly notes: readonly string[];
}

/** One figure of the estimate beside those of the result, in words. */
export interface Remark {
  readonly name: string;
  readonly value: number;
  readonly unit: string;
}

/** How one pass cuts. */
export interface PassRemarks {
  readonly title: string;
  readonly remarks: readonly Remark[];
}

/** The mean-field answer. */
export interface Estimated {
  readonly state: 'done';
  readonly result: Result;
  readonly headline: string;
  /** What limits the job and what would help, in a sentence; null where there is nothing to say. */
  readonly help: string | null;
  readonly passes: readonly PassRemarks[];
  readonly notes: readonly string[];
}

/** Files a cut makes, beside each other in one folder. */
export const ARTEFACT_NAMES = [
  'result.json',
  'history.csv',
  'trace.csv',
  'section.svg',
  'cavity.png',
  'trace.svg',
] as const;

/** A file in the making. */
export interface Artefact {
  readonly name: (typeof ARTEFACT_NAMES)[number];
  readonly bytes: Uint8Array<ArrayBuffer>;
}

/** A cut carried through. */
export interface CutDone {
  readonly state: 'done';
  readonly result: Result;
  readonly headline: string;
  /** What limits the job and what would help, in a sentence; null where there is nothing to say. */
  readonly help: string | null;
  readonly artefacts: readonly Artefact[];
  /** Digest of all fields: the same for any number of workers. */
  readonly hash: string;
  readonly notes: readonly string[];
}

/** What can be asked of the engine: name -> [request, response]. */
export interface Requests {
  check: [JobRequest, SoundJob | Refused];
  estimate: [JobRequest, Estimated | Refused];
  cut: [JobRequest, CutDone | Refused];
}

/** How far a cut is. */
export interface Progress {
  readonly phase: 'preparing' | 'cutting' | 'measuring' | 'drawing';
  /** Share of the whole run that is done, 0 to 1. */
  readonly fraction: number;
  /** Depth of the floor (mm), machining time (min) and rate (mm/min) so far. */
  readonly depthMm: number;
  readonly timeMin: number;
  readonly rateMmPerMin: number;
  /** Time the computation is likely to need still (s); null while nobody can tell. */
  readonly secondsLeft: number | null;
}

/** What the engine tells unasked while a call runs: name -> payload. */
export interface Events {
  progress: Progress;
}

export type RequestName = keyof Requests;
export type RequestOf<N extends RequestName> = Requests[N][0];
export type ResponseOf<N extends RequestName> = Requests[N][1];

/** Why a call failed. */
export interface Failure {
  readonly name: string;
  readonly message: string;
}

/** Messages to the engine. */
export type ToEngine =
  | { readonly kind: 'call'; readonly id: number; readonly name: RequestName; readonly request: unknown }
  | { readonly kind: 'cancel'; readonly id: number };

/** Messages from the engine. */
export type FromEngine =
  | { readonly kind: 'value'; readonly id: number; readonly value: unknown }
  | { readonly kind: 'failure'; readonly id: number; readonly failure: Failure }
  | { readonly kind: 'event'; readonly id: number; readonly name: keyof Events; readonly payload: unknown };
