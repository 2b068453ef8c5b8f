/** Symmetric positive equations of a few unknowns, filled and solved in place: no allocation in a loop over samples or draws. */
export class SmallSystem {
  readonly solution: Float64Array;
  private readonly matrix: Float64Array;
  private readonly right: Float64Array;
  private readonly factor: Float64Array;
  private readonly work: Float64Array;

  constructor(readonly size: number) {
    [this.matrix, this.factor] = [0, 1].map(() => new Float64Array(size * size));
    [this.solution, this.right, this.work] = [0, 1, 2].map(() => new Float64Array(size));
  }

  clear(): void {
    this.matrix.fill(0);
    this.right.fill(0);
  }

  /** Adds one observation to the normal equations: `row` · unknowns = `y`, with this weight. */
  add(row: ArrayLike<number>, y: number, weight: number): void {
    const { size, matrix, right } = this;
    for (let a = 0; a < size; a++) {
      right[a] += weight * row[a] * y;
      for (let b = 0; b <= a; b++) matrix[a * size + b] += weight * row[a] * row[b];
    }
  }

  /** Adds to one element of the diagonal. */
  addDiagonal(k: number, value: number): void {
    this.matrix[k * this.size + k] += value;
  }

  /** Solves by Cholesky's method, the diagonal scaled up by `damping`; false when the equations cannot tell the unknowns apart. */
  solve(damping = 0): boolean {
    const { size, matrix, factor, right, solution } = this;
    for (let a = 0; a < size; a++) {
      for (let b = 0; b <= a; b++) {
        let sum = a === b ? matrix[a * size + a] * (1 + damping) : matrix[a * size + b];
        for (let k = 0; k < b; k++) sum -= factor[a * size + k] * factor[b * size + k];
        if (a !== b) factor[a * size + b] = sum / factor[b * size + b];
        else if (sum > 1e-12 * matrix[a * size + a]) factor[a * size + a] = Math.sqrt(sum);
        else return false;
      }
    }
    this.forward(right, solution);
    for (let a = size - 1; a >= 0; a--) {
      let sum = solution[a];
      for (let k = a + 1; k < size; k++) sum -= factor[k * size + a] * solution[k];
      solution[a] = sum / factor[a * size + a];
    }
    return true;
  }

  /** vᵀ · (matrix)⁻¹ · v, after `solve`: the variance of a linear combination, or a leverage. */
  quadratic(v: ArrayLike<number>): number {
    const { size, work } = this;
    this.forward(v, work);
    let sum = 0;
    for (let a = 0; a < size; a++) sum += work[a] * work[a];
    return sum;
  }

  /** Element k of the diagonal of the inverse, after `solve`. */
  variance(k: number): number {
    return this.quadratic(Array.from({ length: this.size }, (_, a) => (a === k ? 1 : 0)));
  }

  private forward(from: ArrayLike<number>, to: Float64Array): void {
    const { size, factor } = this;
    for (let a = 0; a < size; a++) {
      let sum = from[a];
      for (let k = 0; k < a; k++) sum -= factor[a * size + k] * to[k];
      to[a] = sum / factor[a * size + a];
    }
  }
}
