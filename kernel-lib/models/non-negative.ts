/**
 * Non-negative least squares on the normal equations: minimises ½ xᵀGx − hᵀx with x ≥ 0, by an active set (Bro & De Jong 1997, after
 * Lawson & Hanson). Written here because the mass balance needs a linear term beside the least-squares one, and thousands of solutions
 * that share their scratch memory. The same object solves again and again; it holds no result.
 */
export class NonNegativeSolver {
  private readonly gradient: Float64Array;
  private readonly trial: Float64Array;
  private readonly factor: Float64Array;
  private readonly scale: Float64Array;
  private readonly passive: Int32Array;
  private readonly isPassive: Uint8Array;
  private readonly blocked: Uint8Array;

  /** @param size the greatest number of unknowns */
  constructor(readonly size: number) {
    this.gradient = new Float64Array(size);
    this.trial = new Float64Array(size);
    this.factor = new Float64Array(size * size);
    this.scale = new Float64Array(size);
    this.passive = new Int32Array(size);
    this.isPassive = new Uint8Array(size);
    this.blocked = new Uint8Array(size);
  }

  /**
   * Solves for x (written in place, k values).
   *
   * @param gram G, k × k, symmetric, row by row with `stride` numbers a row
   * @param right h, k values
   * @returns how many unknowns are above zero
   */
  solve(gram: Float64Array, right: Float64Array, x: Float64Array, k: number, stride: number): number {
    const { gradient, passive, isPassive, blocked, scale, trial } = this;
    let largest = 0;
    for (let j = 0; j < k; j++) {
      x[j] = 0;
      isPassive[j] = 0;
      scale[j] = gram[j * stride + j] > 0 ? 1 / Math.sqrt(gram[j * stride + j]) : 0;
      // A column of nothing can explain nothing.
      blocked[j] = scale[j] === 0 ? 1 : 0;
      gradient[j] = right[j];
      largest = Math.max(largest, Math.abs(right[j]) * scale[j]);
    }
    const tolerance = 1e-12 * largest;
    let count = 0;
    for (let round = 0; round < 10 * k + 10; round++) {
      let best = -1;
      let steepest = tolerance;
      for (let j = 0; j < k; j++) {
        if (isPassive[j] === 1 || blocked[j] === 1) continue;
        const slope = gradient[j] * scale[j];
        if (slope > steepest) {
          steepest = slope;
          best = j;
        }
      }
      if (best < 0) break;
      isPassive[best] = 1;
      passive[count++] = best;
      if (!this.solvePassive(gram, right, count, stride)) {
        // The new column is a combination of those already in: it can add nothing.
        count--;
        isPassive[best] = 0;
        blocked[best] = 1;
        continue;
      }
      for (;;) {
        let step = 1;
        for (let i = 0; i < count; i++) {
          const j = passive[i];
          if (trial[i] <= 0) step = Math.min(step, x[j] / (x[j] - trial[i]));
        }
        if (step === 1 && !hasNonPositive(trial, count)) {
          for (let i = 0; i < count; i++) x[passive[i]] = trial[i];
          break;
        }
        let kept = 0;
        for (let i = 0; i < count; i++) {
          const j = passive[i];
          x[j] += step * (trial[i] - x[j]);
          if (x[j] * gram[j * stride + j] * scale[j] > 1e-13 * largest && !(trial[i] <= 0 && x[j] <= 0)) passive[kept++] = j;
          else {
            x[j] = 0;
            isPassive[j] = 0;
          }
        }
        if (kept === count) {
          // Rounding left the smallest one in: take it out, so that the set shrinks and the loop ends.
          let least = 0;
          for (let i = 1; i < count; i++) if (trial[i] < trial[least]) least = i;
          x[passive[least]] = 0;
          isPassive[passive[least]] = 0;
          for (let i = least; i < count - 1; i++) passive[i] = passive[i + 1];
          kept = count - 1;
        }
        count = kept;
        if (count === 0 || !this.solvePassive(gram, right, count, stride)) break;
      }
      for (let j = 0; j < k; j++) {
        let slope = right[j];
        for (let i = 0; i < count; i++) slope -= gram[j * stride + passive[i]] * x[passive[i]];
        gradient[j] = slope;
      }
    }
    return count;
  }

  /** Cholesky on the passive columns, scaled to a unit diagonal. False when the last one depends on the others. */
  private solvePassive(gram: Float64Array, right: Float64Array, count: number, stride: number): boolean {
    const { factor, passive, scale, trial, size } = this;
    for (let i = 0; i < count; i++) {
      const a = passive[i];
      let value = right[a] * scale[a];
      for (let j = 0; j <= i; j++) {
        const b = passive[j];
        let sum = gram[a * stride + b] * scale[a] * scale[b];
        for (let m = 0; m < j; m++) sum -= factor[i * size + m] * factor[j * size + m];
        if (i === j) {
          if (sum <= 1e-12) return false;
          factor[i * size + i] = Math.sqrt(sum);
        } else {
          factor[i * size + j] = sum / factor[j * size + j];
          value -= factor[i * size + j] * trial[j];
        }
      }
      trial[i] = value / factor[i * size + i];
    }
    for (let i = count - 1; i >= 0; i--) {
      let value = trial[i];
      for (let j = i + 1; j < count; j++) value -= factor[j * size + i] * trial[j];
      trial[i] = value / factor[i * size + i];
    }
    for (let i = 0; i < count; i++) trial[i] *= scale[passive[i]];
    return true;
  }
}

function hasNonPositive(values: Float64Array, count: number): boolean {
  for (let i = 0; i < count; i++) if (values[i] <= 0) return true;
  return false;
}
