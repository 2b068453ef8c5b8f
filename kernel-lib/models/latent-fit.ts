/**
 * Data in which one hidden number a sample (how far it has crystallised, or how much of an end member it holds) explains every observable,
 * each through a law of one or two parameters. Fitted by turns: the parameters of each observable with the samples held, the hidden number of each
 * sample with the parameters held, by damped Gauss–Newton steps, until nothing moves.
 */
export interface LatentProblem {
  readonly samples: number;
  readonly observables: number;
  /** Observed values (samples × observables, row by row); NaN where there is none. */
  readonly values: Float64Array;
  /** 1σ of each, same layout. */
  readonly sigma: Float64Array;
  /** Parameters an observable has: 1 or 2. */
  readonly counts: Uint8Array;
  /** The prediction of observable j, with all parameters (two places an observable) and the sample's hidden number. NaN where not possible. */
  predict(j: number, parameters: Float64Array, hidden: number): number;
  /** Starting values; written over with the result. */
  readonly parameters: Float64Array;
  readonly hidden: Float64Array;
  /** Bounds of the hidden number. */
  readonly from: number;
  readonly to: number;
  /** Samples that shape the parameters: 1 for those that count. */
  readonly counted: Uint8Array;
  /** Observable order in which parameters are fitted; dependents after what they depend on. */
  readonly rounds?: number;
}

/** Σ (residual/σ)² of one sample; `without` leaves an observable out. */
export function sampleMisfit(problem: LatentProblem, s: number, hidden: number, without = -1): number {
  const { observables, values, sigma, parameters } = problem;
  let sum = 0;
  for (let j = 0; j < observables; j++) {
    const value = values[s * observables + j];
    if (j === without || Number.isNaN(value)) continue;
    const z = (value - problem.predict(j, parameters, hidden)) / sigma[s * observables + j];
    sum += Number.isNaN(z) ? 1e6 : z * z;
  }
  return sum;
}

/** The hidden number that suits one sample best: a scan for the start where asked, then damped Gauss–Newton. */
export function fitSample(problem: LatentProblem, s: number, start: number, without = -1, scan = 0): number {
  const { observables, values, sigma, parameters, from, to } = problem;
  let best = start;
  let misfit = sampleMisfit(problem, s, best, without);
  for (let i = 0; i <= scan && scan > 0; i++) {
    const at = from + ((to - from) * i) / scan;
    const there = sampleMisfit(problem, s, at, without);
    if (there < misfit) [best, misfit] = [at, there];
  }
  for (let round = 0; round < 12; round++) {
    const h = 1e-5 * Math.max(1e-3, Math.abs(best));
    let [slope, curvature] = [0, 0];
    for (let j = 0; j < observables; j++) {
      const value = values[s * observables + j];
      if (j === without || Number.isNaN(value)) continue;
      const here = problem.predict(j, parameters, best);
      const d = (problem.predict(j, parameters, best + h) - here) / h;
      const weight = 1 / sigma[s * observables + j] ** 2;
      if (Number.isNaN(d) || Number.isNaN(here)) continue;
      slope += weight * d * (value - here);
      curvature += weight * d * d;
    }
    if (!(curvature > 0)) break;
    let move = slope / curvature;
    let improved = false;
    for (let half = 0; half < 8; half++, move /= 2) {
      const next = Math.min(to, Math.max(from, best + move));
      const there = sampleMisfit(problem, s, next, without);
      if (there < misfit) {
        improved = Math.abs(next - best) > 1e-9 * (1 + Math.abs(best));
        [best, misfit] = [next, there];
        break;
      }
    }
    if (!improved) break;
  }
  return best;
}

/** One damped Gauss–Newton step for the parameters of one observable. Returns how much its misfit fell. */
function fitObservable(problem: LatentProblem, j: number): number {
  const { samples, observables, values, sigma, parameters, hidden, counts, counted } = problem;
  const at = 2 * j;
  const misfitOf = () => {
    let sum = 0;
    for (let s = 0; s < samples; s++) {
      const value = values[s * observables + j];
      if (counted[s] === 0 || Number.isNaN(value)) continue;
      const z = (value - problem.predict(j, parameters, hidden[s])) / sigma[s * observables + j];
      sum += Number.isNaN(z) ? 1e6 : z * z;
    }
    return sum;
  };
  const before = misfitOf();
  const [p, q] = [parameters[at], parameters[at + 1]];
  const two = counts[j] === 2;
  const [hp, hq] = [1e-6 * Math.max(Math.abs(p), 1e-6), 1e-6 * Math.max(Math.abs(q), 1e-6)];
  let [gp, gq, pp, pq, qq] = [0, 0, 0, 0, 0];
  for (let s = 0; s < samples; s++) {
    const value = values[s * observables + j];
    if (counted[s] === 0 || Number.isNaN(value)) continue;
    const here = problem.predict(j, parameters, hidden[s]);
    parameters[at] = p + hp;
    const dp = (problem.predict(j, parameters, hidden[s]) - here) / hp;
    parameters[at] = p;
    let dq = 0;
    if (two) {
      parameters[at + 1] = q + hq;
      dq = (problem.predict(j, parameters, hidden[s]) - here) / hq;
      parameters[at + 1] = q;
    }
    if (Number.isNaN(here) || Number.isNaN(dp) || Number.isNaN(dq)) continue;
    const weight = 1 / sigma[s * observables + j] ** 2;
    gp += weight * dp * (value - here);
    gq += weight * dq * (value - here);
    pp += weight * dp * dp;
    pq += weight * dp * dq;
    qq += weight * dq * dq;
  }
  const determinant = two ? pp * qq - pq * pq : pp;
  if (!(determinant > 1e-14 * (two ? pp * qq : 1e-300))) return 0;
  let [mp, mq] = two ? [(qq * gp - pq * gq) / determinant, (pp * gq - pq * gp) / determinant] : [gp / pp, 0];
  for (let half = 0; half < 10; half++, mp /= 2, mq /= 2) {
    parameters[at] = p + mp;
    if (two) parameters[at + 1] = q + mq;
    const after = misfitOf();
    if (after < before) return before - after;
  }
  parameters[at] = p;
  parameters[at + 1] = q;
  return 0;
}

/** Fits by turns until the misfit of the counted samples falls by less than a millionth. Returns each sample's misfit. */
export function fitLatent(problem: LatentProblem, scan = 0): Float64Array {
  const { samples, observables, hidden } = problem;
  const misfits = new Float64Array(samples);
  let total = Infinity;
  for (let round = 0; round < (problem.rounds ?? 300); round++) {
    for (let j = 0; j < observables; j++) fitObservable(problem, j);
    let sum = 0;
    for (let s = 0; s < samples; s++) {
      hidden[s] = fitSample(problem, s, hidden[s], -1, round < 3 ? scan : 0);
      misfits[s] = sampleMisfit(problem, s, hidden[s]);
      if (problem.counted[s] === 1) sum += misfits[s];
    }
    if (total - sum < 1e-6 * (sum + 1e-9) && round > 4) break;
    total = sum;
  }
  return misfits;
}
