/** Heights on a regular grid, x fastest: cell (i, j) is `z[j * nx + i]`, its centre at (x0 + i dx, y0 + j dy). SI. */
export interface HeightField {
  readonly nx: number;
  readonly ny: number;
  /** Spacing along x and y (m). */
  readonly dx: number;
  readonly dy: number;
  /** Centre of cell (0, 0) (m). */
  readonly x0: number;
  readonly y0: number;
  /** Heights, up positive (m), nx x ny. NaN where there is no surface. */
  readonly z: Float32Array | Float64Array;
}

/** Heights along a line at equal spacing (m), up positive. */
export interface Profile {
  readonly spacing: number;
  readonly z: Float64Array;
}

/** Points of a plane curve as two arrays of equal length (m). */
export interface PlaneCurve {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly closed: boolean;
}
