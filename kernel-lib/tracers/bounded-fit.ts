import { SmallSystem } from './small-system';

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

const mostSteps = 80;
/** In units of χ², for a fit within its errors, and in proportion more for one beyond them: far below what an interval can feel. */
const worthwhileGain = 1e-6;
/** Damping: where it starts, by how much a failed step raises and a good one lowers it, and where it gives up. */
const damping = { first: 1e-3, up: 6, down: 1 / 8, least: 1e-9, most: 1e8 } as const;
/** Parameters are scaled to about 1 by the caller, so one absolute step serves the difference quotient. */
const differenceStep = 1e-4;

/**
 * Weighted least squares within bounds from one start: the method of Levenberg and Marquardt, steps cut off at the bounds. A parameter at a
 * bound that the slope presses against is left out of the step, so that the others can move along the bound.
 *
 * Written out here because the general package at hand (ml-levenberg-marquardt 4.1.3) weighs its step by σ² where it should by 1/σ², keeps
 * a step that made the fit worse, and does not stop when nothing is gained: near a bound it does not arrive.
 *
 * @returns the best parameters found and their χ²; χ² is Infinity when the model could not be evaluated at the start
 */
export function fitWithinBounds(problem: BoundedProblem, start: readonly number[]): BoundedSolution {
  const { lower, upper } = problem;
  const look = new Look(problem);
  let parameters = start.map((value, k) => Math.min(upper[k], Math.max(lower[k], value)));
  let chiSquare = look.chiSquare(parameters);
  let strength: number = damping.first;
  for (let step = 0; step < mostSteps && Number.isFinite(chiSquare); step++) {
    const worthwhile = worthwhileGain * Math.max(1, chiSquare / problem.observed.length);
    const free = look.normalEquations(parameters, worthwhile);
    if (free.length === 0) break;
    let moved = false;
    while (!moved && strength <= damping.most) {
      if (look.system(free.length).solve(strength)) {
        const { solution } = look.system(free.length);
        const tried = parameters.slice();
        free.forEach((k, f) => (tried[k] = Math.min(upper[k], Math.max(lower[k], parameters[k] + solution[f]))));
        const reached = look.chiSquare(tried);
        if (reached < chiSquare) {
          moved = true;
          parameters = tried;
          chiSquare = reached;
        }
      }
      strength = moved ? Math.max(damping.least, strength * damping.down) : strength * damping.up;
    }
    if (!moved) break;
  }
  return { parameters, chiSquare };
}

/** Evaluations of one problem, with their working arrays. */
class Look {
  private readonly here: Float64Array;
  private readonly there: Float64Array;
  /** (observed − predicted)/σ at the parameters last looked at. */
  private readonly residual: Float64Array;
  /** Slopes of prediction/σ, one row a parameter. */
  private readonly slopes: Float64Array[];
  private readonly systems: SmallSystem[];
  private readonly row: Float64Array;

  constructor(private readonly problem: BoundedProblem) {
    const { observed, lower } = problem;
    [this.here, this.there, this.residual] = [0, 1, 2].map(() => new Float64Array(observed.length));
    this.slopes = lower.map(() => new Float64Array(observed.length));
    this.systems = lower.map((_, k) => new SmallSystem(k + 1));
    this.row = new Float64Array(lower.length);
  }

  chiSquare(parameters: ArrayLike<number>): number {
    const { observed, sigma, predict } = this.problem;
    predict(parameters, this.here);
    let sum = 0;
    for (let i = 0; i < observed.length; i++) {
      this.residual[i] = (observed[i] - this.here[i]) / sigma[i];
      sum += this.residual[i] * this.residual[i];
    }
    return Number.isNaN(sum) ? Infinity : sum;
  }

  system(free: number): SmallSystem {
    return this.systems[free - 1];
  }

  /**
   * Fills the equations of a step over the parameters that are free to move, and names them; none when no move is worth it: each is asked
   * what χ² it could gain by itself, slope² over curvature.
   */
  normalEquations(at: readonly number[], worthwhile: number): number[] {
    const { lower, upper } = this.problem;
    this.chiSquare(at);
    this.takeSlopes(at);
    const free: number[] = [];
    let gain = 0;
    for (let k = 0; k < at.length; k++) {
      let slope = 0;
      let curvature = 0;
      for (let i = 0; i < this.residual.length; i++) {
        slope += this.residual[i] * this.slopes[k][i];
        curvature += this.slopes[k][i] * this.slopes[k][i];
      }
      // χ² falls where the slope is positive.
      if ((at[k] <= lower[k] && slope < 0) || (at[k] >= upper[k] && slope > 0) || !(curvature > 0)) continue;
      free.push(k);
      gain = Math.max(gain, (slope * slope) / curvature);
    }
    if (gain < worthwhile) return [];
    const system = this.system(free.length);
    system.clear();
    for (let i = 0; i < this.residual.length; i++) {
      for (let f = 0; f < free.length; f++) this.row[f] = this.slopes[free[f]][i];
      system.add(this.row, this.residual[i], 1);
    }
    return free;
  }

  /** Slopes by forward differences, backward at an upper bound; `here` must hold the prediction at `at`. */
  takeSlopes(at: readonly number[]): readonly Float64Array[] {
    const { predict, sigma, upper } = this.problem;
    const shifted = at.slice();
    for (let k = 0; k < at.length; k++) {
      const by = at[k] + differenceStep > upper[k] ? -differenceStep : differenceStep;
      shifted[k] = at[k] + by;
      predict(shifted, this.there);
      shifted[k] = at[k];
      for (let i = 0; i < sigma.length; i++) this.slopes[k][i] = (this.there[i] - this.here[i]) / by / sigma[i];
    }
    return this.slopes;
  }
}

/**
 * Linear 1σ of each parameter at a solution: the inverse of JᵀWJ, held by a weak prior as wide as the bounds, so that a direction which
 * the data do not constrain gets about the width of its bounds instead of infinity.
 */
export function linearSigma(problem: BoundedProblem, at: readonly number[]): number[] {
  const look = new Look(problem);
  look.chiSquare(at);
  const slopes = look.takeSlopes(at);
  const system = new SmallSystem(at.length);
  for (let i = 0; i < problem.sigma.length; i++)
    system.add(
      slopes.map((of) => of[i]),
      0,
      1,
    );
  at.forEach((_, k) => system.addDiagonal(k, 1 / (problem.upper[k] - problem.lower[k]) ** 2));
  return system.solve() ? at.map((_, k) => Math.sqrt(system.variance(k))) : at.map((_, k) => problem.upper[k] - problem.lower[k]);
}
