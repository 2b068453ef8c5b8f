import { NonNegativeSolver } from './non-negative';

/**
 * One mass balance: parent = F·daughter + Σ sᵢ·xᵢ·phaseᵢ with xᵢ ≥ 0, s = +1 for what left the parent and −1 for what it took in. With
 * `closure`, F = 1 − Σ sᵢ·xᵢ exactly; without it F is an unknown of its own (F ≥ 0).
 */
export interface BalanceProblem {
  /** Number of oxides, n, and of phases, k. */
  readonly n: number;
  readonly k: number;
  readonly parent: Float64Array;
  readonly daughter: Float64Array;
  /** Compositions of the phases, one after the other (k × n). */
  readonly phases: Float64Array;
  readonly signs: Float64Array;
  /** Variances of the analyses (n each); daughter's zero and parent's one make it ordinary least squares. */
  readonly parentVariance: Float64Array;
  readonly daughterVariance: Float64Array;
  readonly closure: boolean;
}

/**
 * Solves mass balances with errors on both analyses. The weight of an oxide is 1/(σ²parent + F²·σ²daughter), which depends on the answer;
 * its derivative is carried as a linear term, so the result is the minimum of chi-square itself and F is not biased by the daughter's
 * error. Holds scratch memory for repeated use.
 */
export class BalanceSolver {
  /** Masses of the phases, relative to the parent (k). */
  readonly x: Float64Array;
  F = NaN;
  chiSquare = NaN;
  /** How many unknowns are above zero, F not counted. */
  active = 0;
  private readonly solver: NonNegativeSolver;
  private readonly unknowns: Float64Array;
  private readonly columns: Float64Array;
  private readonly gram: Float64Array;
  private readonly right: Float64Array;
  private readonly target: Float64Array;
  private readonly weights: Float64Array;
  readonly residuals: Float64Array;

  constructor(n: number, k: number) {
    const K = k + 1;
    this.solver = new NonNegativeSolver(K);
    this.x = new Float64Array(k);
    this.unknowns = new Float64Array(K);
    this.columns = new Float64Array(K * n);
    this.gram = new Float64Array(K * K);
    this.right = new Float64Array(K);
    this.target = new Float64Array(n);
    this.weights = new Float64Array(n);
    this.residuals = new Float64Array(n);
  }

  solve(problem: BalanceProblem): void {
    const { n, k, parent, daughter, phases, signs, closure } = problem;
    const { columns, target, unknowns, x } = this;
    const K = closure ? k : k + 1;
    for (let j = 0; j < k; j++) {
      for (let i = 0; i < n; i++) columns[j * n + i] = signs[j] * (phases[j * n + i] - (closure ? daughter[i] : 0));
    }
    if (!closure) columns.set(daughter, k * n);
    for (let i = 0; i < n; i++) target[i] = parent[i] - (closure ? daughter[i] : 0);
    const fixedWeights = problem.daughterVariance.every((variance) => variance === 0);
    let F = 0.6;
    let pull = 0;
    for (let round = 0; round < 60; round++) {
      this.weigh(problem, F);
      this.normalEquations(n, K);
      for (let j = 0; j < k && closure; j++) this.right[j] -= signs[j] * pull;
      if (!closure) this.right[k] += pull;
      this.active = this.solver.solve(this.gram, this.right, unknowns, K, K);
      let next = closure ? 1 : unknowns[k];
      for (let j = 0; j < k; j++) {
        x[j] = unknowns[j];
        if (closure) next -= signs[j] * unknowns[j];
      }
      if (!closure && unknowns[k] > 0) this.active--;
      this.residuals.set(target);
      for (let j = 0; j < K; j++) if (unknowns[j] !== 0) for (let i = 0; i < n; i++) this.residuals[i] -= columns[j * n + i] * unknowns[j];
      // dχ²/dF through the weights, halved: F·Σ (r/σ²)²·σ²daughter.
      let slope = 0;
      for (let i = 0; i < n; i++) slope += (this.residuals[i] * this.weights[i]) ** 2 * problem.daughterVariance[i];
      const moved = Math.abs(next - F);
      F = Math.max(0, next);
      pull = F * slope;
      if (fixedWeights || moved < 1e-10) break;
    }
    this.F = F;
    this.weigh(problem, F);
    let sum = 0;
    for (let i = 0; i < n; i++) sum += this.residuals[i] ** 2 * this.weights[i];
    this.chiSquare = sum;
  }

  private weigh({ n, parentVariance, daughterVariance }: BalanceProblem, F: number): void {
    for (let i = 0; i < n; i++) this.weights[i] = 1 / (parentVariance[i] + F * F * daughterVariance[i]);
  }

  private normalEquations(n: number, K: number): void {
    const { columns, gram, right, target, weights } = this;
    for (let a = 0; a < K; a++) {
      let toTarget = 0;
      for (let i = 0; i < n; i++) toTarget += columns[a * n + i] * target[i] * weights[i];
      right[a] = toTarget;
      for (let b = 0; b <= a; b++) {
        let sum = 0;
        for (let i = 0; i < n; i++) sum += columns[a * n + i] * columns[b * n + i] * weights[i];
        gram[a * K + b] = sum;
        gram[b * K + a] = sum;
      }
    }
  }
}
