/** The tool's outline in the cutting plane. */

export interface ToolOutline {
  /** Width where the cut meets it (m). */
  readonly width: number;
  /** Middle of the width (m). */
  readonly centre: number;
  /** Depth of its face below the entry face (m). */
  readonly faceDepth: number;
  /** Radius of its edge now (m). */
  readonly edgeRadius: number;
  /** Length lost to wear (m). */
  readonly worn: number;
  /** Radius of its edge when new (m). */
  readonly newEdgeRadius: number;
}

const ARC_STEPS = 8;

/** Points (x0, z0, x1, z1, ... in m) down the left flank from z = `from`, across the face and up the right flank. */
export function toolProfile(tool: ToolOutline, from: number, state: 'worn' | 'new' = 'worn'): Float64Array {
  const face = state === 'worn' ? tool.faceDepth : tool.faceDepth + tool.worn;
  const half = tool.width / 2;
  const radius = Math.min(half, Math.max(0, state === 'worn' ? tool.edgeRadius : tool.newEdgeRadius));
  const points: number[] = [tool.centre - half, from];
  for (const side of [-1, 1]) {
    for (let n = 0; n <= ARC_STEPS; n++) {
      const share = side < 0 ? n / ARC_STEPS : 1 - n / ARC_STEPS;
      const angle = (share * Math.PI) / 2;
      points.push(
        tool.centre + side * (half - radius + radius * Math.cos(angle)),
        face - radius + radius * Math.sin(angle),
      );
    }
  }
  points.push(tool.centre + half, from);
  return Float64Array.from(points);
}
