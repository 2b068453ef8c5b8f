/** The four cubic B-splines that are not zero at a place of a uniform knot line, with their slopes (per unit of x). */
export function cubicBasis(place: number, step: number, values: Float64Array, slopes: Float64Array, at: number): void {
  const t = place;
  const t2 = t * t;
  const t3 = t2 * t;
  values[at] = (1 - 3 * t + 3 * t2 - t3) / 6;
  values[at + 1] = (4 - 6 * t2 + 3 * t3) / 6;
  values[at + 2] = (1 + 3 * t + 3 * t2 - 3 * t3) / 6;
  values[at + 3] = t3 / 6;
  slopes[at] = (-1 + 2 * t - t2) / (2 * step);
  slopes[at + 1] = (-4 * t + 3 * t2) / (2 * step);
  slopes[at + 2] = (1 + 2 * t - 3 * t2) / (2 * step);
  slopes[at + 3] = t2 / (2 * step);
}

/** A tensor product of two uniform cubic B-spline lines over a rectangle. */
export interface SplineGrid {
  readonly left: number;
  readonly bottom: number;
  readonly step: number;
  /** Basis functions along x and along y; y runs fastest, so it should be the shorter side (it sets the band width). */
  readonly countX: number;
  readonly countY: number;
  readonly size: number;
  readonly width: number;
}

export function splineGrid(frame: { left: number; right: number; bottom: number; top: number }, step: number): SplineGrid {
  const cells = (length: number) => Math.max(2, Math.ceil(length / step));
  const countX = cells(frame.right - frame.left) + 3;
  const countY = cells(frame.top - frame.bottom) + 3;
  // Centre the whole cells on the frame.
  const left = (frame.left + frame.right - (countX - 3) * step) / 2;
  const bottom = (frame.bottom + frame.top - (countY - 3) * step) / 2;
  return { left, bottom, step, countX, countY, size: countX * countY, width: 3 * countY + 3 };
}

/** Basis of n points: first basis function along x and y, then 4 + 4 values and 4 + 4 slopes a point. */
export interface SplineBasis {
  readonly firstX: Int32Array;
  readonly firstY: Int32Array;
  readonly values: Float64Array;
  readonly slopes: Float64Array;
}

/** Points outside the rectangle take the polynomial of the nearest cell no further than its edge. */
export function splineBasis(grid: SplineGrid, x: ArrayLike<number>, y: ArrayLike<number>): SplineBasis {
  const size = x.length;
  const basis = {
    firstX: new Int32Array(size),
    firstY: new Int32Array(size),
    values: new Float64Array(8 * size),
    slopes: new Float64Array(8 * size),
  };
  for (let i = 0; i < size; i++) {
    const u = Math.min(grid.countX - 3, Math.max(0, (x[i] - grid.left) / grid.step));
    const v = Math.min(grid.countY - 3, Math.max(0, (y[i] - grid.bottom) / grid.step));
    basis.firstX[i] = Math.min(grid.countX - 4, Math.floor(u));
    basis.firstY[i] = Math.min(grid.countY - 4, Math.floor(v));
    cubicBasis(u - basis.firstX[i], grid.step, basis.values, basis.slopes, 8 * i);
    cubicBasis(v - basis.firstY[i], grid.step, basis.values, basis.slopes, 8 * i + 4);
  }
  return basis;
}

/** Value and slopes of the spline with the given coefficients at point i of a basis. */
export function splineAt(grid: SplineGrid, basis: SplineBasis, coefficients: Float64Array, i: number, into: Float64Array): void {
  const { values, slopes } = basis;
  let value = 0;
  let slopeX = 0;
  let slopeY = 0;
  for (let a = 0; a < 4; a++) {
    const line = (basis.firstX[i] + a) * grid.countY + basis.firstY[i];
    let sum = 0;
    let rise = 0;
    for (let b = 0; b < 4; b++) {
      sum += values[8 * i + 4 + b] * coefficients[line + b];
      rise += slopes[8 * i + 4 + b] * coefficients[line + b];
    }
    value += values[8 * i + a] * sum;
    slopeX += slopes[8 * i + a] * sum;
    slopeY += values[8 * i + a] * rise;
  }
  into[0] = value;
  into[1] = slopeX;
  into[2] = slopeY;
}

/** Adds Σ weight · b bᵀ to a lower band and Σ weight · z · b to a right side. */
export function addSquares(
  grid: SplineGrid,
  basis: SplineBasis,
  weights: Float64Array,
  z: Float64Array,
  band: Float64Array,
  right: Float64Array,
): void {
  const { countY, width } = grid;
  const row = width + 1;
  const product = new Float64Array(16);
  const index = new Int32Array(16);
  for (let i = 0; i < weights.length; i++) {
    if (weights[i] < 1e-6) continue;
    for (let a = 0, n = 0; a < 4; a++) {
      for (let b = 0; b < 4; b++, n++) {
        product[n] = basis.values[8 * i + a] * basis.values[8 * i + 4 + b];
        index[n] = (basis.firstX[i] + a) * countY + basis.firstY[i] + b;
      }
    }
    for (let n = 0; n < 16; n++) {
      const weighted = weights[i] * product[n];
      right[index[n]] += weighted * z[i];
      for (let m = 0; m <= n; m++) band[index[n] * row + width - (index[n] - index[m])] += weighted * product[m];
    }
  }
}

/**
 * The bending penalty on the coefficients as a lower band: squared second differences along x and y and twice the squared mixed
 * difference, which is the thin-plate energy on the grid. Planes bend nothing, so three combinations of coefficients are free.
 */
export function bendingPenalty({ countX, countY, size, width }: SplineGrid): Float64Array {
  const band = new Float64Array(size * (width + 1));
  const add = (terms: readonly (readonly [number, number])[], weight: number) => {
    for (const [i, p] of terms) for (const [j, q] of terms) if (j <= i) band[i * (width + 1) + width - (i - j)] += weight * p * q;
  };
  for (let a = 0; a < countX; a++) {
    for (let b = 0; b < countY; b++) {
      const at = a * countY + b;
      if (a + 2 < countX)
        add(
          [
            [at, 1],
            [at + countY, -2],
            [at + 2 * countY, 1],
          ],
          1,
        );
      if (b + 2 < countY)
        add(
          [
            [at, 1],
            [at + 1, -2],
            [at + 2, 1],
          ],
          1,
        );
      if (a + 1 < countX && b + 1 < countY)
        add(
          [
            [at, 1],
            [at + 1, -1],
            [at + countY, -1],
            [at + countY + 1, 1],
          ],
          2,
        );
    }
  }
  return band;
}
