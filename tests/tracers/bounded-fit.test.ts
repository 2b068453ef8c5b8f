import { fcnnls } from 'ml-fcnnls';
import { Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { fitWithinBounds, linearSigma } from '../../kernel-lib/tracers/bounded-fit';
import { seededRandom } from '../../kernel-lib/chemistry';

/** A linear problem y = A·p: the one case in which other libraries know the constrained answer. */
function linearProblem(A: readonly (readonly number[])[], observed: readonly number[], sigma: readonly number[], upper = 100) {
  return {
    predict: (p: ArrayLike<number>, out: Float64Array) => {
      for (let i = 0; i < out.length; i++) out[i] = A[i].reduce((sum, a, k) => sum + a * p[k], 0);
    },
    observed: Float64Array.from(observed),
    sigma: Float64Array.from(sigma),
    lower: A[0].map(() => 0),
    upper: A[0].map(() => upper),
  };
}

describe('least squares within bounds', () => {
  it('agrees with non-negative least squares of a general library (ml-fcnnls), bounds active or not', () => {
    const random = seededRandom(21, 'test');
    let active = 0;
    for (let n = 0; n < 40; n++) {
      const A = Array.from({ length: 8 }, () => Array.from({ length: 3 }, () => random.normal()));
      const observed = A.map((row) => row[0] * 2 + row[1] * (n % 3 === 0 ? -1.5 : 1) + row[2] * 0.5 + 0.1 * random.normal());
      const expected = fcnnls(new Matrix(A), Matrix.columnVector(observed)).K.to1DArray();
      const { parameters } = fitWithinBounds(
        linearProblem(
          A,
          observed,
          A.map(() => 1),
        ),
        [0.7, 0.7, 0.7],
      );
      expected.forEach((value, k) => expect(parameters[k], `case ${n}, parameter ${k}`).toBeCloseTo(value, 2));
      if (expected.some((value) => value === 0)) active++;
    }
    expect(active).toBeGreaterThan(5);
  });

  it('gives precise data their weight: the same as dividing both sides by σ', () => {
    const random = seededRandom(22, 'test');
    for (let n = 0; n < 10; n++) {
      const A = Array.from({ length: 8 }, () => Array.from({ length: 2 }, () => 1 + random.uniform()));
      const sigma = A.map((_, i) => 10 ** -(i % 4));
      const observed = A.map((row, i) => row[0] * 3 + row[1] * 2 + sigma[i] * random.normal());
      const expected = fcnnls(
        new Matrix(A.map((row, i) => row.map((a) => a / sigma[i]))),
        Matrix.columnVector(observed.map((y, i) => y / sigma[i])),
      ).K.to1DArray();
      const { parameters } = fitWithinBounds(linearProblem(A, observed, sigma), [1, 1]);
      expected.forEach((value, k) => expect(parameters[k]).toBeCloseTo(value, 3));
    }
  });

  it('knows the error of a straight line, and gives a flat direction the width of its bounds', () => {
    const x = [0, 1, 2, 3, 4];
    const line = linearProblem(
      x.map((at) => [1, at]),
      x.map((at) => 2 + 3 * at),
      x.map(() => 0.5),
      1000,
    );
    const sigma = linearSigma(line, [2, 3]);
    // handbook formulas of the straight line: σ_slope = σ/√Σ(x − x̄)², σ_intercept = σ·√(Σx²/(n·Σ(x − x̄)²))
    expect(sigma[1]).toBeCloseTo(0.5 / Math.sqrt(10), 6);
    expect(sigma[0]).toBeCloseTo(0.5 * Math.sqrt(30 / 50), 6);
    const flat = linearProblem(
      x.map(() => [1, 0]),
      x.map(() => 2),
      x.map(() => 0.5),
      10,
    );
    expect(linearSigma(flat, [2, 5])[1]).toBeCloseTo(10, 6);
  });

  it('returns the start with an infinite χ² where the model cannot be evaluated', () => {
    const broken = { ...linearProblem([[1], [1]], [1, 1], [1, 1]), predict: (_: ArrayLike<number>, out: Float64Array) => void out.fill(NaN) };
    expect(fitWithinBounds(broken, [3])).toEqual({ parameters: [3], chiSquare: Infinity });
  });
});
