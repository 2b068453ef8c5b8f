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

/** Iterations of one round: the solver itself stops only at a perfect fit, so it runs in short rounds until nothing is to be gained. */
const iterationsOfRound = 5;
const mostRounds = 24;
/** In units of χ²: far below what an interval can feel. */
const worthwhileGain = 1e-3;
/** Damping of a round: raised when a round gains nothing although the slope says it should, as happens when a step is cut off at a bound. */
const dampings = [0.01, 30, 3000, 300_000] as const;
/** Parameters are scaled to about 1 by the caller, so one absolute step serves the difference quotient. */
const differenceStep = 1e-4;

/**
 * Weighted least squares within bounds, by Levenberg and Marquardt's method, from one start. A parameter at a bound that the slope presses
 * against is held there for a round, so that the others can move along the bound.
 *
 * @returns the best parameters found and their χ²; χ² is Infinity when the model could not be evaluated at the start
 */
export function fitWithinBounds(problem: BoundedProblem, start: readonly number[]): BoundedSolution {
  const { predict, observed, sigma, lower, upper } = problem;
  const count = observed.length;
  const x = Array.from({ length: count }, (_, i) => i);
  const out = new Float64Array(count);
  const residual = new Float64Array(count);
  // The solver gets data and predictions divided by σ, and unit weights, because its own weights enter its step the wrong way round (as σ²
  // instead of 1/σ², version 4.1.3).
  const whitened = observed.map((value, i) => value / sigma[i]);
  const chiSquareOf = (parameters: ArrayLike<number>): number => {
    predict(parameters, out);
    let sum = 0;
    for (let i = 0; i < count; i++) {
      residual[i] = (observed[i] - out[i]) / sigma[i];
      sum += residual[i] * residual[i];
    }
    return Number.isNaN(sum) ? Infinity : sum;
  };
  let parameters = start.map((value, k) => Math.min(upper[k], Math.max(lower[k], value)));
  let chiSquare = chiSquareOf(parameters);
  let level = 0;
  for (let round = 0; round < mostRounds && Number.isFinite(chiSquare); round++) {
    const free = worthMoving(problem, parameters, chiSquareOf, residual);
    if (free.length === 0) break;
    const whole = parameters.slice();
    // The solver evaluates one parameter vector at every datum in turn: predict once a vector.
    const parameterised = (moved: number[]) => {
      for (let f = 0; f < free.length; f++) whole[free[f]] = moved[f];
      const predicted = new Float64Array(count);
      predict(whole, predicted);
      for (let i = 0; i < count; i++) predicted[i] /= sigma[i];
      return (i: number) => predicted[i];
    };
    const found = levenbergMarquardt({ x, y: whitened }, parameterised, {
      initialValues: free.map((k) => parameters[k]),
      weights: 1,
      minValues: free.map((k) => lower[k]),
      maxValues: free.map((k) => upper[k]),
      gradientDifference: differenceStep,
      damping: dampings[level],
      maxIterations: iterationsOfRound,
      errorTolerance: 1e-9,
    });
    const moved = parameters.slice();
    free.forEach((k, f) => (moved[k] = found.parameterValues[f]));
    const reached = chiSquareOf(moved);
    if (reached < chiSquare) {
      chiSquare = reached;
      parameters = moved;
      level = 0;
    } else if (++level === dampings.length) break;
  }
  return { parameters, chiSquare };
}

/**
 * The parameters that are free to move, or none when no move is worth it: each is asked what χ² it could gain by itself, slope² over four
 * times the curvature; one at a bound that presses outward is not free.
 */
function worthMoving(
  { predict, sigma, lower, upper }: BoundedProblem,
  at: readonly number[],
  chiSquareOf: (parameters: ArrayLike<number>) => number,
  residual: Float64Array,
): number[] {
  chiSquareOf(at);
  const here = new Float64Array(sigma.length);
  const there = new Float64Array(sigma.length);
  predict(at, here);
  const free: number[] = [];
  let gain = 0;
  const shifted = at.slice();
  for (let k = 0; k < at.length; k++) {
    const by = at[k] + differenceStep > upper[k] ? -differenceStep : differenceStep;
    shifted[k] = at[k] + by;
    predict(shifted, there);
    shifted[k] = at[k];
    let slope = 0;
    let curvature = 0;
    for (let i = 0; i < here.length; i++) {
      const change = (there[i] - here[i]) / by / sigma[i];
      slope += residual[i] * change;
      curvature += change * change;
    }
    // χ² falls where residual · change is positive.
    if ((at[k] <= lower[k] && slope < 0) || (at[k] >= upper[k] && slope > 0) || !(curvature > 0)) continue;
    free.push(k);
    gain = Math.max(gain, (slope * slope) / curvature);
  }
  return gain < worthwhileGain ? [] : free;
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
