import { NonNegativeSolver } from './non-negative';

/** All samples of one line of descent: oxides in wt %, then logs of elements, sample by sample. */
export interface AssemblageProblem {
  readonly samples: number;
  readonly oxides: number;
  readonly elements: number;
  readonly phases: number;
  readonly values: Float64Array;
  readonly sigma: Float64Array;
  /** Compositions of the phases, wt % (phases × oxides), and their coefficients (phases × elements). */
  readonly compositions: Float64Array;
  readonly coefficients: Float64Array;
  /** Relative uncertainty of the coefficients. */
  readonly coefficientError: number;
  /** The sample that holds F = 1. */
  readonly parentAt: number;
  /** How often each sample counts. */
  readonly weights: Float64Array;
}

/** A fitted line of descent. */
export interface AssemblageState {
  /** Mass fractions of the phases in the crystals, sum 1. */
  readonly shares: Float64Array;
  readonly F: Float64Array;
  /** Oxides in wt %, then logs of elements. */
  readonly parent: Float64Array;
  readonly misfits: Float64Array;
  readonly counts: Int32Array;
  /** Root mean square residual of each quantity, in σ. */
  readonly rms: Float64Array;
}

/** Weight of the condition that the shares sum to one, against data of unit variance. */
const closureWeight = 1e6;
const golden = (Math.sqrt(5) - 1) / 2;

/**
 * Fits shares, parent and F by turns: each is a linear problem, or a search in one number, when the other two are held.
 *
 * @param from a state to go on from
 */
export function descentOfAssemblage(problem: AssemblageProblem, from: AssemblageState | undefined, rounds: number): AssemblageState {
  const { samples, oxides, elements, phases, values, sigma, compositions, coefficients, coefficientError, parentAt, weights } = problem;
  const J = oxides + elements;
  const shares = from?.shares.slice() ?? new Float64Array(phases).fill(1 / phases);
  const parent = from?.parent.slice() ?? values.slice(parentAt * J, (parentAt + 1) * J);
  for (let j = 0; j < J; j++) if (Number.isNaN(parent[j])) parent[j] = meanOf(problem, j);
  const F = from?.F.slice() ?? new Float64Array(samples).fill(0.8);
  F[parentAt] = 1;
  const bulk = new Float64Array(J);
  const gram = new Float64Array(phases * phases);
  const right = new Float64Array(phases);
  const solver = new NonNegativeSolver(phases);
  const setBulk = () => {
    bulk.fill(0);
    for (let p = 0; p < phases; p++) {
      for (let i = 0; i < oxides; i++) bulk[i] += shares[p] * compositions[p * oxides + i];
      for (let e = 0; e < elements; e++) bulk[oxides + e] += shares[p] * coefficients[p * elements + e];
    }
  };
  /** Residual in σ of one quantity of a sample at a liquid fraction; the coefficients' error grows with the distance from the parent. */
  const residual = (s: number, j: number, at: number): number => {
    const value = values[s * J + j];
    if (Number.isNaN(value)) return NaN;
    if (j < oxides) return (value - (bulk[j] + (parent[j] - bulk[j]) / at)) / sigma[s * J + j];
    const logF = Math.log(at);
    return (value - (parent[j] + (bulk[j] - 1) * logF)) / Math.hypot(sigma[s * J + j], coefficientError * bulk[j] * logF);
  };
  const misfit = (s: number, at: number): number => {
    let sum = 0;
    for (let j = 0; j < J; j++) {
      const z = residual(s, j, at);
      if (!Number.isNaN(z)) sum += z * z;
    }
    return sum;
  };
  const fitF = (s: number): void => {
    let [low, high] = [Math.log(0.03), Math.log(1.6)];
    let [a, b] = [high - golden * (high - low), low + golden * (high - low)];
    let [fa, fb] = [misfit(s, Math.exp(a)), misfit(s, Math.exp(b))];
    while (high - low > 1e-6) {
      if (fa < fb) {
        [high, b, fb] = [b, a, fa];
        a = high - golden * (high - low);
        fa = misfit(s, Math.exp(a));
      } else {
        [low, a, fa] = [a, b, fb];
        b = low + golden * (high - low);
        fb = misfit(s, Math.exp(b));
      }
    }
    F[s] = Math.exp((low + high) / 2);
  };
  const fitParent = (): void => {
    for (let j = 0; j < J; j++) {
      let [top, bottom] = [0, 0];
      for (let s = 0; s < samples; s++) {
        const value = values[s * J + j];
        if (Number.isNaN(value) || weights[s] === 0) continue;
        const logF = Math.log(F[s]);
        const error = j < oxides ? F[s] * sigma[s * J + j] : Math.hypot(sigma[s * J + j], coefficientError * bulk[j] * logF);
        const at = j < oxides ? bulk[j] + F[s] * (value - bulk[j]) : value - (bulk[j] - 1) * logF;
        top += (weights[s] * at) / error ** 2;
        bottom += weights[s] / error ** 2;
      }
      if (bottom > 0) parent[j] = top / bottom;
    }
  };
  const fitShares = (): void => {
    gram.fill(closureWeight);
    right.fill(closureWeight);
    for (let s = 0; s < samples; s++) {
      if (weights[s] === 0 || s === parentAt) continue;
      const logF = Math.log(F[s]);
      for (let j = 0; j < J; j++) {
        const value = values[s * J + j];
        if (Number.isNaN(value)) continue;
        const isOxide = j < oxides;
        const error = isOxide ? sigma[s * J + j] : Math.hypot(sigma[s * J + j], coefficientError * bulk[j] * logF);
        const lever = isOxide ? (1 - 1 / F[s]) / error : logF / error;
        const target = isOxide ? (value - parent[j] / F[s]) / error : (value - parent[j] + logF) / error;
        for (let a = 0; a < phases; a++) {
          const ca = (isOxide ? compositions[a * oxides + j] : coefficients[a * elements + j - oxides]) * lever * weights[s];
          if (ca === 0) continue;
          right[a] += ca * target;
          for (let b = 0; b < phases; b++)
            gram[a * phases + b] += ca * (isOxide ? compositions[b * oxides + j] : coefficients[b * elements + j - oxides]) * lever;
        }
      }
    }
    solver.solve(gram, right, shares, phases, phases);
    const sum = shares.reduce((total, each) => total + each, 0);
    if (sum > 0) for (let p = 0; p < phases; p++) shares[p] /= sum;
  };
  setBulk();
  let last = Infinity;
  for (let round = 0; round < rounds; round++) {
    let total = 0;
    for (let s = 0; s < samples; s++) {
      if (s !== parentAt) fitF(s);
      total += weights[s] * misfit(s, F[s]);
    }
    fitShares();
    setBulk();
    fitParent();
    if (Math.abs(last - total) < 1e-8 * (1 + total) && round > 5) break;
    last = total;
  }
  const misfits = new Float64Array(samples);
  const counts = new Int32Array(samples);
  const rms = new Float64Array(J);
  for (let j = 0; j < J; j++) {
    let [sum, count] = [0, 0];
    for (let s = 0; s < samples; s++) {
      const z = residual(s, j, F[s]);
      if (Number.isNaN(z)) continue;
      misfits[s] += z * z;
      counts[s]++;
      [sum, count] = [sum + z * z, count + 1];
    }
    rms[j] = Math.sqrt(sum / count);
  }
  return { shares, F, parent, misfits, counts, rms };
}

function meanOf({ samples, oxides, elements, values }: AssemblageProblem, j: number): number {
  const J = oxides + elements;
  let [sum, count] = [0, 0];
  for (let s = 0; s < samples; s++) if (!Number.isNaN(values[s * J + j])) [sum, count] = [sum + values[s * J + j], count + 1];
  return sum / count;
}
