/**
 * Symmetric positive definite systems with a narrow band, as penalised splines make them. Factorising n unknowns with band width b costs
 * n·b² instead of n³, which is what lets a fit re-weight 20,000 events some thirty times in about a second.
 */
export class BandedCholesky {
  private readonly factor: Float64Array;
  private readonly row: number;

  /**
   * @param band lower band by rows: element (i, j), j ≤ i, at `i·(width + 1) + width − (i − j)`
   * @param size unknowns
   * @param width elements below the diagonal
   * @throws RangeError when the matrix is not positive definite
   */
  constructor(
    band: Float64Array,
    readonly size: number,
    readonly width: number,
  ) {
    const factor = band.slice();
    const row = width + 1;
    for (let i = 0; i < size; i++) {
      const first = Math.max(0, i - width);
      for (let j = first; j <= i; j++) {
        let sum = factor[i * row + width - (i - j)];
        for (let k = Math.max(first, j - width); k < j; k++) sum -= factor[i * row + width - (i - k)] * factor[j * row + width - (j - k)];
        if (j < i) factor[i * row + width - (i - j)] = sum / factor[j * row + width];
        else {
          if (!(sum > 0)) throw new RangeError('The surface is not determined by these events.');
          factor[i * row + width] = Math.sqrt(sum);
        }
      }
    }
    this.factor = factor;
    this.row = row;
  }

  /** Solves for a right side, in place. */
  solve(right: Float64Array, from = 0): Float64Array {
    const { factor, row, size, width } = this;
    for (let i = from; i < size; i++) {
      let sum = right[i];
      for (let k = Math.max(from, i - width); k < i; k++) sum -= factor[i * row + width - (i - k)] * right[k];
      right[i] = sum / factor[i * row + width];
    }
    for (let i = size - 1; i >= 0; i--) {
      let sum = right[i];
      const last = Math.min(size - 1, i + width);
      for (let k = i + 1; k <= last; k++) sum -= factor[k * row + width - (k - i)] * right[k];
      right[i] = sum / factor[i * row + width];
    }
    return right;
  }

  /** The inverse, column by column (size × size). */
  inverse(): Float64Array {
    const { size } = this;
    const inverse = new Float64Array(size * size);
    for (let j = 0; j < size; j++) {
      const column = inverse.subarray(j * size, (j + 1) * size);
      column[j] = 1;
      this.solve(column, j);
    }
    return inverse;
  }
}

/** Σ over the band of inverse × matrix: the trace of their product. */
export function traceOfProduct(inverse: Float64Array, band: Float64Array, size: number, width: number): number {
  let trace = 0;
  for (let i = 0; i < size; i++) {
    for (let j = Math.max(0, i - width); j <= i; j++) trace += (i === j ? 1 : 2) * inverse[i * size + j] * band[i * (width + 1) + width - (i - j)];
  }
  return trace;
}

/** vᵀ M v for a banded symmetric M. */
export function quadraticForm(vector: Float64Array, band: Float64Array, size: number, width: number): number {
  let sum = 0;
  for (let i = 0; i < size; i++) {
    for (let j = Math.max(0, i - width); j <= i; j++) sum += (i === j ? 1 : 2) * vector[i] * vector[j] * band[i * (width + 1) + width - (i - j)];
  }
  return sum;
}
