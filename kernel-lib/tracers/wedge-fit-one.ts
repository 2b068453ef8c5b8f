import { jStat } from 'jstat';
import { seededRandom, type SeededRandom } from '../chemistry';
import { showAs, type Showable, type TableView } from '../display';
import { sampleCorrelation } from 'simple-statistics';
import { fitWithinBounds, linearSigma, type BoundedProblem, type BoundedSolution } from './bounded-fit';
import { quantileOfSorted } from './censored-quantiles';
import { wedgeParameterNames, WedgeModel, type WedgeMeltingStyle, type WedgeParameterName } from './fluxed-wedge';
import type { WedgeObservation } from './wedge-data';
import type { MantleFacies, WedgeEndMembers } from './wedge-end-members';

/** Whether the data say what a parameter is. */
export type WedgeStatus = 'resolved' | 'upper limit only' | 'not resolvable' | 'fixed';

/** One fitted parameter, as a fraction by weight. */
export interface WedgeEstimate {
  /** Best fit; NaN when there are too few elements to fit at all. */
  readonly value: number;
  /** Ends of the 95 % interval. */
  readonly low: number;
  readonly high: number;
  readonly status: WedgeStatus;
}

/** One fit of the fluxed wedge. Shows itself element by element. */
export interface OneWedgeFit extends Showable {
  readonly name: string;
  readonly samples: number;
  readonly parameters: Readonly<Record<WedgeParameterName, WedgeEstimate>>;
  readonly elements: readonly string[];
  /** Elements asked for that had no usable value. */
  readonly unused: readonly string[];
  /** ppm, one an element. */
  readonly observed: Float64Array;
  readonly modelled: Float64Array;
  /** ln(observed/modelled) over its 1σ. */
  readonly residual: Float64Array;
  /** 100·(observed/modelled − 1). */
  readonly residualPercent: Float64Array;
  /** The element with the largest residual. */
  readonly worstElement?: string;
  readonly chiSquare: number;
  readonly degreesOfFreedom: number;
  /** Factor by which the intervals were widened because the misfit exceeds the errors (1: not). */
  readonly widened: number;
  /** Share of each element from wedge, fluid and sediment melt at the best fit (0–1). */
  readonly fromWedge: Float64Array;
  readonly fromFluid: Float64Array;
  readonly fromSediment: Float64Array;
  /** The parameters that were fitted, in the order of `correlations` and `draws`. */
  readonly fitted: readonly WedgeParameterName[];
  /** Correlation of each pair of fitted parameters over the draws. */
  readonly correlations: readonly (readonly number[])[];
  /** Every draw of each fitted parameter. */
  readonly draws: readonly Float64Array[];
  readonly verdict: string;
}

export interface WedgeFitSetup {
  readonly endMembers: WedgeEndMembers;
  readonly facies: MantleFacies;
  readonly style: WedgeMeltingStyle;
  readonly bounds: Readonly<Record<WedgeParameterName, readonly [number, number]>>;
  readonly fixed: Partial<Readonly<Record<WedgeParameterName, number>>>;
  readonly seed: number;
  readonly resolvedWithin: number;
}

export interface PreparedWedge {
  readonly observation: WedgeObservation;
  readonly setup: WedgeFitSetup;
  readonly model: WedgeModel;
  readonly free: readonly WedgeParameterName[];
  readonly problem: BoundedProblem;
  /** Scaled parameters of the solver to the four of the model. */
  readonly unscale: (scaled: ArrayLike<number>, whole: Float64Array) => void;
  readonly random: SeededRandom;
  readonly draws: number[][];
}

/** What the draws start from. */
export interface BestWedge extends BoundedSolution {
  /** Other minima that fit about as well. */
  readonly rivals: readonly BoundedSolution[];
  /** Linear 1σ of each scaled parameter. */
  readonly spread: readonly number[];
}

/** Typical sizes: the solver sees parameters divided by these (melt on its logarithm). */
const scaleOf: Readonly<Record<WedgeParameterName, number>> = { melt: 1, fluid: 0.01, sediment: 0.01, priorMelt: 0.02 };
/** Random looks over the whole box; the best of them are where the solver starts. */
const looks = 400;
const starts = 12;
/** The 95 % point of χ² with one degree of freedom: minima closer than this cannot be told apart. */
const asGood = 3.84;

export function prepareWedge(observation: WedgeObservation, setup: WedgeFitSetup): PreparedWedge {
  const { endMembers, facies, style, bounds, fixed, seed } = setup;
  const model = new WedgeModel(endMembers, observation.elements, facies, style);
  const free = wedgeParameterNames.filter((name) => fixed[name] === undefined);
  const at = free.map((name) => wedgeParameterNames.indexOf(name));
  const held = wedgeParameterNames.map((name) => fixed[name] ?? 0);
  const unscale = (scaled: ArrayLike<number>, whole: Float64Array): void => {
    for (let p = 0; p < held.length; p++) whole[p] = held[p];
    for (let k = 0; k < at.length; k++) whole[at[k]] = free[k] === 'melt' ? Math.exp(scaled[k]) : scaled[k] * scaleOf[free[k]];
  };
  const scaledBound = (name: WedgeParameterName, end: 0 | 1) => (name === 'melt' ? Math.log(bounds.melt[end]) : bounds[name][end] / scaleOf[name]);
  const whole = new Float64Array(4);
  const problem: BoundedProblem = {
    predict: (scaled, out) => {
      unscale(scaled, whole);
      model.logMelt(whole, out);
    },
    observed: observation.observed.map(Math.log),
    sigma: observation.sigma,
    lower: free.map((name) => scaledBound(name, 0)),
    upper: free.map((name) => scaledBound(name, 1)),
  };
  return { observation, setup, model, free, problem, unscale, random: seededRandom(seed, 'fitFluxedWedge'), draws: [] };
}

/** The best of several starts; undefined when there are not more elements than parameters. */
export function bestWedge({ observation, free, problem, random }: PreparedWedge): BestWedge | undefined {
  if (observation.elements.length <= free.length) return undefined;
  const { lower, upper } = problem;
  const out = new Float64Array(observation.elements.length);
  const looked = Array.from({ length: looks }, () => {
    // Squared, so that the looks crowd towards small additions, where arc magmas are.
    const at = free.map((name, k) => lower[k] + (upper[k] - lower[k]) * (name === 'melt' ? random.uniform() : random.uniform() ** 2));
    problem.predict(at, out);
    let chiSquare = 0;
    for (let i = 0; i < out.length; i++) chiSquare += ((problem.observed[i] - out[i]) / problem.sigma[i]) ** 2;
    return { at, chiSquare: Number.isFinite(chiSquare) ? chiSquare : Number.MAX_VALUE };
  });
  looked.sort((p, q) => p.chiSquare - q.chiSquare);
  const solutions = looked.slice(0, starts).map(({ at }) => fitWithinBounds(problem, at));
  solutions.sort((a, b) => a.chiSquare - b.chiSquare);
  const best = solutions[0];
  return { ...best, rivals: solutions.filter(({ chiSquare }) => chiSquare - best.chiSquare < asGood), spread: linearSigma(problem, best.parameters) };
}

/** Perturbs every concentration by its error and fits again, from near the best fit or one of its rivals, so that flat directions are walked. */
export function drawWedge(prepared: PreparedWedge, best: BestWedge, count: number): void {
  const { problem, random, draws } = prepared;
  const perturbed = new Float64Array(problem.observed.length);
  for (let d = 0; d < count; d++) {
    for (let i = 0; i < perturbed.length; i++) perturbed[i] = problem.observed[i] + problem.sigma[i] * random.normal();
    const from = best.rivals[Math.floor(random.uniform() * best.rivals.length)];
    const start = from.parameters.map((value, k) => value + best.spread[k] * random.normal());
    draws.push(fitWithinBounds({ ...problem, observed: perturbed }, start).parameters);
  }
}

export function finishWedge(prepared: PreparedWedge, best: BestWedge | undefined): OneWedgeFit {
  const { observation, model, free, unscale, draws } = prepared;
  const { name, samples, elements, observed, sigma, unused } = observation;
  const degreesOfFreedom = elements.length - free.length;
  const whole = new Float64Array(4);
  if (best === undefined) return hopeless(prepared);
  unscale(best.parameters, whole);
  const modelled = new Float64Array(elements.length);
  model.logMelt(whole, modelled);
  const residual = modelled.map((log, i) => (Math.log(observed[i]) - log) / sigma[i]);
  for (let i = 0; i < modelled.length; i++) modelled[i] = Math.exp(modelled[i]);
  const worst = residual.reduce((at, value, i) => (Math.abs(value) > Math.abs(residual[at]) ? i : at), 0);
  const tooLarge = best.chiSquare > jStat.chisquare.inv(0.95, degreesOfFreedom);
  const widened = tooLarge ? Math.sqrt(best.chiSquare / degreesOfFreedom) : 1;

  const columns = free.map(() => new Float64Array(draws.length));
  const drawn = new Float64Array(4);
  draws.forEach((scaled, d) => {
    unscale(scaled, drawn);
    free.forEach((each, k) => (columns[k][d] = drawn[wedgeParameterNames.indexOf(each)]));
  });
  const parameters = Object.fromEntries(
    wedgeParameterNames.map((each, p) => {
      const k = free.indexOf(each);
      return [
        each,
        k < 0 ? { value: whole[p], low: whole[p], high: whole[p], status: 'fixed' } : estimate(prepared, best, k, whole[p], columns[k], widened),
      ];
    }),
  ) as Record<WedgeParameterName, WedgeEstimate>;
  const { fromWedge, fromFluid, fromSediment } = model.shares(whole);
  return showAs(
    {
      name,
      samples,
      parameters,
      elements,
      unused,
      observed,
      modelled,
      residual,
      residualPercent: observed.map((value, i) => 100 * (value / modelled[i] - 1)),
      worstElement: elements[worst],
      chiSquare: best.chiSquare,
      degreesOfFreedom,
      widened,
      fromWedge,
      fromFluid,
      fromSediment,
      fitted: free,
      correlations: columns.map((a) => columns.map((b) => correlation(a, b))),
      draws: columns,
      verdict: verdictOf(parameters, free, widened, elements[worst], residual[worst]),
    },
    oneFitView,
  );
}

const words: Readonly<Record<WedgeParameterName, string>> = {
  melt: 'melt fraction',
  fluid: 'slab fluid',
  sediment: 'sediment melt',
  priorMelt: 'prior melting',
};

/** Interval and verdict of one parameter. The interval is that of the draws; the verdict also asks the linear error, which no flat direction escapes. */
function estimate(
  { free, problem, setup }: PreparedWedge,
  best: BestWedge,
  k: number,
  value: number,
  draws: Float64Array,
  widened: number,
): WedgeEstimate {
  const name = free[k];
  const [least, most] = setup.bounds[name];
  const sorted = draws.slice().sort();
  const widen = (end: number): number => {
    const wide = name === 'melt' ? value * (end / value) ** widened : value + (end - value) * widened;
    return Math.min(most, Math.max(least, wide));
  };
  const low = Math.min(value, widen(quantileOfSorted(sorted, 0.025)));
  const high = Math.max(value, widen(quantileOfSorted(sorted, 0.975)));
  const natural = (scaled: number) => (name === 'melt' ? Math.exp(scaled) : scaled * scaleOf[name]);
  const reach = 1.96 * widened * best.spread[k];
  const linearLow = natural(Math.max(problem.lower[k], best.parameters[k] - reach));
  const linearHigh = natural(Math.min(problem.upper[k], best.parameters[k] + reach));
  const lowest = Math.min(low, linearLow);
  const highest = Math.max(high, linearHigh);
  const status: WedgeStatus =
    lowest > 0 && lowest > least && highest / lowest <= setup.resolvedWithin
      ? 'resolved'
      : highest <= most / 2 && name !== 'melt'
        ? 'upper limit only'
        : 'not resolvable';
  return status === 'not resolvable' ? { value, low: lowest, high: highest, status } : { value, low, high, status };
}

function correlation(a: Float64Array, b: Float64Array): number {
  return a === b ? 1 : sampleCorrelation(Array.from(a), Array.from(b));
}

function hopeless({ observation, free, setup, unscale, problem }: PreparedWedge): OneWedgeFit {
  const { name, samples, elements, observed, unused } = observation;
  const whole = new Float64Array(4);
  unscale(problem.lower, whole);
  const blank = () => new Float64Array(elements.length).fill(NaN);
  const parameters = Object.fromEntries(
    wedgeParameterNames.map((each, p) => [
      each,
      free.includes(each)
        ? { value: NaN, low: setup.bounds[each][0], high: setup.bounds[each][1], status: 'not resolvable' }
        : { value: whole[p], low: whole[p], high: whole[p], status: 'fixed' },
    ]),
  ) as Record<WedgeParameterName, WedgeEstimate>;
  return showAs(
    {
      name,
      samples,
      parameters,
      elements,
      unused,
      observed,
      modelled: blank(),
      residual: blank(),
      residualPercent: blank(),
      chiSquare: NaN,
      degreesOfFreedom: elements.length - free.length,
      widened: 1,
      fromWedge: blank(),
      fromFluid: blank(),
      fromSediment: blank(),
      fitted: free,
      correlations: [],
      draws: [],
      verdict: `Not resolvable: ${elements.length} usable elements for ${free.length} parameters.`,
    },
    oneFitView,
  );
}

function verdictOf(
  parameters: Readonly<Record<WedgeParameterName, WedgeEstimate>>,
  free: readonly WedgeParameterName[],
  widened: number,
  worst: string,
  residual: number,
): string {
  const those = (status: WedgeStatus) => free.filter((name) => parameters[name].status === status).map((name) => words[name]);
  const [unresolved, limits] = [those('not resolvable'), those('upper limit only')];
  const parts = [
    unresolved.length === free.length
      ? 'Not resolvable with these elements.'
      : unresolved.length > 0
        ? `Not resolvable with these elements: ${unresolved.join(', ')}.`
        : 'Resolved.',
    ...(limits.length > 0 ? [`Upper limit only: ${limits.join(', ')}.`] : []),
    ...(widened > 1
      ? [
          `Misfit beyond the errors (worst ${worst}, ${residual.toFixed(1).replace('-', '−')} σ): intervals widened ×${widened.toFixed(1)}; ` +
            'other end members may be needed.',
        ]
      : []),
  ];
  return parts.join(' ');
}

function oneFitView(fit: Omit<OneWedgeFit, keyof Showable>): TableView {
  const short = (value: number, digits = 3) => (Number.isNaN(value) ? null : Number(value.toPrecision(digits)));
  const percent = (value: number) => (Number.isNaN(value) ? null : Math.round(100 * value));
  return {
    title: `Fluxed wedge fitted to ${fit.name}: residual of each element, and where it came from`,
    columns: [
      'element',
      'observed (ppm)',
      'modelled (ppm)',
      'residual (%)',
      'residual (σ)',
      'from wedge (%)',
      'from fluid (%)',
      'from sediment melt (%)',
    ],
    rows: fit.elements.map((element, e) => [
      element,
      short(fit.observed[e], 4),
      short(fit.modelled[e], 4),
      short(fit.residualPercent[e]),
      short(fit.residual[e], 2),
      percent(fit.fromWedge[e]),
      percent(fit.fromFluid[e]),
      percent(fit.fromSediment[e]),
    ]),
    notes: [fit.verdict, ...(fit.unused.length > 0 ? [`No usable value: ${fit.unused.join(', ')}.`] : [])],
  };
}
