import { jStat } from 'jstat';
import { seededRandom } from '../chemistry';
import { medianSorted, quantileSorted } from 'simple-statistics';

/** A straight line y = intercept + slope·x. */
export interface Line {
  readonly slope: number;
  readonly intercept: number;
}

export type RobustMethod = 'theil-sen' | 'huber';

/** Median of the finite values (NaN where there is none). */
export function medianOf(values: ArrayLike<number>): number {
  const finite = Float64Array.from(values).filter(Number.isFinite).sort();
  return finite.length === 0 ? NaN : medianSorted(finite as unknown as number[]);
}

/** A quantile (0–1) of the finite values. */
export function quantileOf(values: ArrayLike<number>, share: number): number {
  const finite = Float64Array.from(values).filter(Number.isFinite).sort();
  return finite.length === 0 ? NaN : quantileSorted(finite as unknown as number[], share);
}

/** Spread of the finite values as a standard deviation from the median absolute deviation. */
export function robustSpread(values: ArrayLike<number>): number {
  const middle = medianOf(values);
  return 1.4826 * medianOf(Float64Array.from(values, (value) => Math.abs(value - middle)));
}

/** Theil–Sen line: the median of all pairs' slopes, through the median residual. NaN where x does not vary. */
export function theilSen(x: ArrayLike<number>, y: ArrayLike<number>): Line {
  const slopes: number[] = [];
  for (let i = 0; i < x.length; i++) for (let j = i + 1; j < x.length; j++) if (x[i] !== x[j]) slopes.push((y[j] - y[i]) / (x[j] - x[i]));
  const slope = medianOf(slopes);
  return { slope, intercept: medianOf(Float64Array.from(x, (value, i) => y[i] - slope * value)) };
}

/** Huber's M-estimate of a line by re-weighted least squares (tuning constant 1.345), started from the Theil–Sen line. */
export function huberLine(x: ArrayLike<number>, y: ArrayLike<number>): Line {
  let line = theilSen(x, y);
  if (Number.isNaN(line.slope)) return line;
  for (let round = 0; round < 60; round++) {
    const residuals = Float64Array.from(x, (value, i) => y[i] - line.intercept - line.slope * value);
    const scale = robustSpread(residuals);
    // Half the points or more lie on the line: there is no scatter to weigh the others against, and the line stands.
    if (scale <= 1e-12 * (Math.abs(line.intercept) + Math.abs(line.slope) * Math.max(...Array.from(x, Math.abs)))) return line;
    let [sw, sx, sy, sxx, sxy] = [0, 0, 0, 0, 0];
    for (let i = 0; i < x.length; i++) {
      const far = Math.abs(residuals[i]);
      const weight = far <= 1.345 * scale ? 1 : (1.345 * scale) / far;
      sw += weight;
      sx += weight * x[i];
      sy += weight * y[i];
      sxx += weight * x[i] * x[i];
      sxy += weight * x[i] * y[i];
    }
    const slope = (sw * sxy - sx * sy) / (sw * sxx - sx * sx);
    const next = { slope, intercept: (sy - slope * sx) / sw };
    const done = Math.abs(next.slope - line.slope) <= 1e-10 * (1 + Math.abs(slope));
    line = next;
    if (done) break;
  }
  return line;
}

export function robustLine(method: RobustMethod, x: ArrayLike<number>, y: ArrayLike<number>): Line {
  return method === 'huber' ? huberLine(x, y) : theilSen(x, y);
}

/** Kendall's τ-b and its two-sided probability under no order: exact for up to 40 values without ties, else by seeded permutation. */
export function kendall(x: ArrayLike<number>, y: ArrayLike<number>, seed: number): { readonly tau: number; readonly p: number } {
  const n = x.length;
  const score = (order: ArrayLike<number>) => {
    let sum = 0;
    for (let i = 0; i < n; i++) for (let j = i + 1; j < n; j++) sum += Math.sign(x[j] - x[i]) * Math.sign(order[j] - order[i]);
    return sum;
  };
  let tiesX = 0;
  let tiesY = 0;
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      if (x[i] === x[j]) tiesX++;
      if (y[i] === y[j]) tiesY++;
    }
  }
  const pairs = (n * (n - 1)) / 2;
  const observed = score(y);
  const tau = observed / Math.sqrt((pairs - tiesX) * (pairs - tiesY));
  if (tiesX + tiesY === 0 && n <= 40) return { tau, p: exactKendall(n, observed) };
  const draw = randomSource(seed);
  const shuffled = Float64Array.from(y);
  const rounds = 4999;
  let atLeast = 0;
  for (let r = 0; r < rounds; r++) {
    for (let i = n - 1; i > 0; i--) {
      const j = Math.floor(draw() * (i + 1));
      [shuffled[i], shuffled[j]] = [shuffled[j], shuffled[i]];
    }
    if (Math.abs(score(shuffled)) >= Math.abs(observed)) atLeast++;
  }
  return { tau, p: (atLeast + 1) / (rounds + 1) };
}

/** Share of the n! orders whose concordance score is at least as far from zero: by counting orders by their number of inversions. */
function exactKendall(n: number, observed: number): number {
  const pairs = (n * (n - 1)) / 2;
  let shares = new Float64Array(pairs + 1);
  shares[0] = 1;
  for (let size = 2; size <= n; size++) {
    const next = new Float64Array(pairs + 1);
    for (let k = 0; k <= pairs; k++) for (let move = 0; move < size && move <= k; move++) next[k] += shares[k - move] / size;
    shares = next;
  }
  let p = 0;
  for (let inversions = 0; inversions <= pairs; inversions++) if (Math.abs(pairs - 2 * inversions) >= Math.abs(observed)) p += shares[inversions];
  return Math.min(1, p);
}

/** A seeded source of numbers in [0, 1). */
export function randomSource(seed: number): () => number {
  return seededRandom(seed, 'seed').uniform;
}

/** Student's t that is exceeded in size with probability α, ν ≥ 1 degrees of freedom. */
export function studentT(alpha: number, freedom: number): number {
  return jStat.studentt.inv(1 - alpha / 2, freedom);
}
