/** Crisp lines on pixels: coverage of a polyline of given width, by distance to its segments. */

export interface Coverage {
  readonly width: number;
  readonly height: number;
  /** 0..255 per pixel. */
  readonly alpha: Uint8Array;
}

export function newCoverage(width: number, height: number): Coverage {
  return { width, height, alpha: new Uint8Array(width * height) };
}

function coverSegment(coverage: Coverage, segment: readonly [number, number, number, number], radius: number): void {
  const { width, height, alpha } = coverage;
  const [x0, y0, x1, y1] = segment;
  const reach = radius + 1;
  const left = Math.max(0, Math.floor(Math.min(x0, x1) - reach));
  const right = Math.min(width - 1, Math.ceil(Math.max(x0, x1) + reach));
  const top = Math.max(0, Math.floor(Math.min(y0, y1) - reach));
  const bottom = Math.min(height - 1, Math.ceil(Math.max(y0, y1) + reach));
  const dx = x1 - x0;
  const dy = y1 - y0;
  const square = dx * dx + dy * dy;
  for (let j = top; j <= bottom; j++) {
    for (let i = left; i <= right; i++) {
      const px = i + 0.5 - x0;
      const py = j + 0.5 - y0;
      const share = square === 0 ? 0 : Math.min(1, Math.max(0, (px * dx + py * dy) / square));
      const distance = Math.sqrt((px - share * dx) ** 2 + (py - share * dy) ** 2);
      const covered = Math.min(1, Math.max(0, radius + 0.5 - distance));
      const at = j * width + i;
      const value = Math.round(255 * covered);
      if (value > (alpha[at] as number)) alpha[at] = value;
    }
  }
}

/** Covers a polyline (x0, y0, x1, y1, ... in pixels) `thickness` pixels wide; overlaps do not add up. */
export function coverLine(coverage: Coverage, points: ArrayLike<number>, thickness: number): void {
  for (let n = 0; n + 3 < points.length; n += 2) {
    const segment = [points[n], points[n + 1], points[n + 2], points[n + 3]] as [number, number, number, number];
    coverSegment(coverage, segment, thickness / 2);
  }
}
