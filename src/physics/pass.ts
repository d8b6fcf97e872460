import type { Carrier } from './slurry/viscosity.ts';

/** How slurry comes to the face. Pressures are gauge (Pa), of the supply, and positive. */
export type Delivery =
  | { readonly kind: 'flooded' }
  /** Pumped in through the tool's bores. */
  | { readonly kind: 'throughTool'; readonly pressure: number }
  /** Drawn off through the tool's bores. */
  | { readonly kind: 'suction'; readonly pressure: number };

/** The slurry beside its grit. */
export interface SlurrySupply {
  readonly carrier: Carrier;
  readonly delivery: Delivery;
  /** A charge that goes round and wears; absent where the slurry is always fresh. */
  readonly charge?: {
    /** Volume of the charge (m3). */
    readonly volume: number;
    /** Time it has been cutting before this pass, under the same setting (s). */
    readonly used: number;
  };
}

/** How the length of tool lost to wear is dealt with. */
export interface ToolLife {
  /** The machine goes deeper by what the tool has lost; otherwise the cavity is shallower by it. */
  readonly compensated: boolean;
  /** Length that may be lost before the tool is done (m); absent where nobody has said. */
  readonly length?: number;
}

/** A cut that comes out at the other side. */
export interface Exit {
  /** A backing is bonded to the exit face, so that the last ligament cannot bend. */
  readonly backing: boolean;
  /** Share of the load kept near the exit, 0 to 1. */
  readonly loadShare: number;
  /** Work left under the tool when the load is taken back to that share (m). */
  readonly from: number;
}
