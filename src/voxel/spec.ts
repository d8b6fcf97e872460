import type { OutlineSpec, RoundHole } from '#src/base/outline.ts';
import type { SlurryFace } from '#src/physics/estimate.ts';
import type { Exit, ToolLife } from '#src/physics/pass.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { ToolFace } from '#src/physics/tool-face.ts';
import type { BrickField } from './bricks.ts';
import type { Field } from './kernels/contract.ts';

/** How the tool is driven: a static load (N), or a feed (m/s) that holds whatever load it takes. */
export type Drive = { readonly kind: 'load'; readonly load: number } | { readonly kind: 'feed'; readonly feed: number };

/** What is to be cut. All SI. */
export interface CutSpec {
  readonly conditions: Conditions;
  readonly tool: OutlineSpec;
  /** Slurry bores through the tool: each leaves a core standing. None if left out. */
  readonly bores?: readonly RoundHole[];
  /** Form of the tool's face; flat if left out. */
  readonly face?: ToolFace;
  readonly edgeRadius: number;
  readonly drive: Drive;
  /** Mean depth of the floor under the tip of the tool at which the cut ends (m). */
  readonly depth: number;
  readonly runout: number;
  readonly seed: number;
  readonly pass: number;
  readonly replicate: number;
  /** The cavity the passes before have left, in the same frame; untouched work if left out. */
  readonly before?: BrickField | null;
  /** The trace strip of the pass before, for the roughness this pass starts on; flat if left out. */
  readonly stripBefore?: Field | null;
  /** Wear of the tool's edge and length as the cut feels it; the edge stays as it is if left out. */
  readonly toolLife?: ToolLife;
  /** Where the cut comes out: the far face lies `thickness` below the entry face. A blind cut if left out. */
  readonly exit?: Exit & { readonly thickness: number };
  /** Pitch at mean chip radius over this number, magnification included. */
  readonly columnsPerRadius: number;
  /** Most columns of the floor. */
  readonly columnBudget: number;
  /** Pitch of the floor (m), instead of the one the budget gives. */
  readonly pitch?: number;
  /** Lateral magnification, instead of the one the pitch asks for. */
  readonly magnification?: number;
  /** Without the trace strip. */
  readonly withoutStrip?: boolean;
  /** The slurry under the face; fresh grit everywhere if left out. */
  readonly slurry?: SlurryFace;
  readonly precision?: 32 | 64;
}
