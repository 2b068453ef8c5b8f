import { levenbergMarquardt } from 'ml-levenberg-marquardt';
import { inverse, Matrix } from 'ml-matrix';

/** A least-squares problem over bounded parameters: the model writes its prediction of every datum at once. */
export interface BoundedProblem {
  readonly predict: (parameters: ArrayLike<number>, out: Float64Array) => void;
  readonly observed: Float64Array;
  /** 1σ of each datum. */
  readonly sigma: Float64Array;
  readonly lower: readonly number[];
  readonly upper: readonly number[];
}

export interface BoundedSolution {
  readonly parameters: number[];
  /** Σ (residual/σ)². */
  readonly chiSquare: number;
}

/** Iterations of one round: the solver itself stops only at a perfect fit, so it runs in short rounds until nothing is gained. */
const iterationsOfRound = 6;
const mostRounds = 16;
/** In units of χ²: far below what an interval can feel. */
const worthwhileGain = 1e-3;
/** Parameters are scaled to about 1 by the caller, so one absolute step serves the difference quotient. */
const differenceStep = 1e-4;

/**
 * Weighted least squares within bounds, by Levenberg and Marquardt's method, from one start.
 *
 * @returns the best parameters found and their χ²; χ² is Infinity when the model could not be evaluated at the start
 */
export function fitWithinBounds(problem: BoundedProblem, start: readonly number[]): BoundedSolution {
  const { predict, observed, sigma, lower, upper } = problem;
  const count = observed.length;
  const x = Array.from({ length: count }, (_, i) => i);
  const out = new Float64Array(count);
  // The solver evaluates one parameter vector at every datum in turn: predict once a vector. Data and predictions are divided by σ here and
  // the solver gets unit weights, because its own weights enter its step the wrong way round (as σ² instead of 1/σ², version 4.1.3).
  const parameterised = (parameters: number[]) => {
    const predicted = new Float64Array(count);
    predict(parameters, predicted);
    for (let i = 0; i < count; i++) predicted[i] /= sigma[i];
    return (i: number) => predicted[i];
  };
  const whitened = observed.map((value, i) => value / sigma[i]);
  const chiSquareOf = (parameters: ArrayLike<number>): number => {
    predict(parameters, out);
    let sum = 0;
    for (let i = 0; i < count; i++) sum += ((observed[i] - out[i]) / sigma[i]) ** 2;
    return Number.isNaN(sum) ? Infinity : sum;
  };
  let parameters = start.map((value, k) => Math.min(upper[k], Math.max(lower[k], value)));
  let chiSquare = chiSquareOf(parameters);
  if (!Number.isFinite(chiSquare)) return { parameters, chiSquare };
  for (let round = 0; round < mostRounds; round++) {
    const before = chiSquare;
    const found = levenbergMarquardt({ x, y: whitened }, parameterised, {
      initialValues: parameters.slice(), weights: 1, minValues: lower, maxValues: upper, gradientDifference: differenceStep,
      damping: 0.01, maxIterations: iterationsOfRound, errorTolerance: 1e-9,
    });
    const reached = chiSquareOf(found.parameterValues);
    if (reached < chiSquare) {
      chiSquare = reached;
      parameters = found.parameterValues;
    }
    if (before - chiSquare < worthwhileGain) break;
  }
  return { parameters, chiSquare };
}

/**
 * Linear 1σ of each parameter at a solution: the inverse of JᵀWJ, held by a weak prior as wide as the bounds, so that a direction which
 * the data do not constrain gets about the width of its bounds instead of infinity.
 */
export function linearSigma(problem: BoundedProblem, at: readonly number[]): number[] {
  const { predict, sigma, lower, upper } = problem;
  const count = sigma.length;
  const size = at.length;
  const jacobian = at.map((value, k) => {
    const [high, low] = [1, -1].map((sign) => {
      const shifted = at.slice();
      shifted[k] = Math.min(upper[k], Math.max(lower[k], value + sign * differenceStep));
      const out = new Float64Array(count);
      predict(shifted, out);
      return { at: shifted[k], out };
    });
    return high.out.map((prediction, i) => (prediction - low.out[i]) / (high.at - low.at) / sigma[i]);
  });
  const normal = Array.from({ length: size }, (_, k) =>
    Array.from({ length: size }, (_, l) => {
      let sum = k === l ? 1 / (upper[k] - lower[k]) ** 2 : 0;
      for (let i = 0; i < count; i++) sum += jacobian[k][i] * jacobian[l][i];
      return sum;
    }),
  );
  const covariance = inverse(new Matrix(normal));
  return at.map((_, k) => Math.sqrt(covariance.get(k, k)));
}
