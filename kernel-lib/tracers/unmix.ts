import { setImmediate as nextTurn } from 'node:timers/promises';
import { seededRandom } from '../chemistry';
import { showAs, type Showable, type TableView } from '../display';
import { resolveColumn, step, type Column, type Step, type Suite } from '../suite';
import { checkCall } from './check-call';
import { fitWithinBounds, type BoundedProblem } from './bounded-fit';
import { quantileOfSorted } from './censored-quantiles';
import { referenceComposition, type ReferenceComposition } from './reference';

/** One end member of a mixture. */
export interface MixingComponent {
  readonly name: string;
  /** Isotope ratios and the concentrations (ppm) of their elements: own values, or the key of a reservoir. */
  readonly composition: ReferenceComposition;
  /** 1σ of its isotope ratios and concentrations, where it is not exactly known. */
  readonly sigma?: Readonly<Record<string, number>>;
}

/** How mixing proportions are solved. */
export interface UnmixOptions {
  /** Isotope ratios to use (default: all that the suite and every component have). */
  readonly ratios?: readonly string[];
  /** Least 1σ by ratio (default: usual reproducibility between laboratories, see `isotopeReproducibility`). */
  readonly error?: Readonly<Record<string, number>>;
  /** Monte Carlo draws (default 200). */
  readonly draws?: number;
  /** Default 1. */
  readonly seed?: number;
  readonly signal?: AbortSignal;
  readonly progress?: (done: number, total: number) => void;
}

/** Shares of the components in every sample. */
export interface MixingShares extends Showable {
  readonly samples: readonly string[];
  readonly components: readonly string[];
  readonly ratios: readonly string[];
  /** By component: share by weight (0–1), n values; NaN where a ratio is missing. */
  readonly shares: ReadonlyMap<string, Float64Array>;
  /** Ends of the 95 % interval of each share. */
  readonly low: ReadonlyMap<string, Float64Array>;
  readonly high: ReadonlyMap<string, Float64Array>;
  /** χ² of each sample; far above the number of ratios less the free shares, the sample is no such mixture. */
  readonly chiSquare: Float64Array;
  readonly degreesOfFreedom: number;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** Usual 1σ reproducibility of isotope ratios between laboratories (common practice). */
export const isotopeReproducibility: Readonly<Record<string, number>> = {
  '87Sr/86Sr': 0.00002,
  '143Nd/144Nd': 0.00001,
  '176Hf/177Hf': 0.00001,
  '206Pb/204Pb': 0.008,
  '207Pb/204Pb': 0.006,
  '208Pb/204Pb': 0.015,
};

const elementOfRatio = (ratio: string): string => /\/\d+([A-Z][a-z]?)$/.exec(ratio)?.[1] ?? '';
const drawsAtATime = 40;

/**
 * Mixing proportions of each sample from isotope ratios: two or more components, shares by weight that are not negative and sum to 1.
 *
 * The mixture of a ratio is weighted by the concentration of its element in each component, so shares are of mass, not of the element. Solved
 * by weighted least squares with a seeded Monte Carlo over the errors of samples and components. A sample off the mixing line gets the nearest
 * mixture and a large χ².
 *
 * @param suite n samples with isotope ratios
 * @param components two to four, each with every ratio and the concentration (ppm) of its element
 * @param options `ratios`, `error`, `draws`, `seed`, `signal`, `progress`
 * @returns shares (0–1) with 95 % intervals, χ² by sample
 * @throws RangeError when a component lacks a value, or there are fewer ratios than free shares
 * @source Langmuir et al. 1978
 * @example (await unmix(suite, [
 *   { name: 'mantle', composition: 'depleted-mantle-2005' }, { name: 'sediment', composition: 'subducting-sediment-1998' },
 * ])).shares
 */
export async function unmix(suite: Suite, components: readonly MixingComponent[], options: UnmixOptions = {}): Promise<MixingShares> {
  checkCall('unmix', suite, options);
  const { error = {}, draws = 200, seed = 1, signal, progress } = options;
  if (!Array.isArray(components) || components.length < 2 || components.length > 4) throw new RangeError('unmix takes two to four components.');
  if (new Set(components.map(({ name }) => name)).size !== components.length) throw new RangeError('unmix: every component needs a name of its own.');
  if (!(Number.isInteger(draws) && draws >= 50)) throw new RangeError(`unmix: draws is ${String(draws)}; give a whole number of 50 or more.`);
  const random = seededRandom(seed, 'unmix');
  const references = components.map(({ composition }) => referenceComposition(composition));
  const ratios = chooseRatios(suite, components, references, options.ratios);
  if (ratios.length < components.length - 1) {
    throw new RangeError(
      `unmix: ${components.length} components need ${components.length - 1} isotope ratios or more; there are ${ratios.length} ` +
        `(${ratios.join(', ') || 'none'}) that the suite and every component hold.`,
    );
  }
  const columns = ratios.map((ratio) => resolveColumn(suite, ratio)!);
  const least = ratios.map((ratio) => error[ratio] ?? isotopeReproducibility[ratio] ?? NaN);
  least.forEach((value, k) => {
    if (!(value > 0)) throw new RangeError(`unmix: there is no usual error of ${ratios[k]}; give one in error.`);
  });
  const exact = new Mixture(
    ratios.map((ratio) => references.map(({ valueOf }) => valueOf(ratio)!)),
    ratios.map((ratio) => references.map(({ valueOf }) => valueOf(elementOfRatio(ratio))!)),
  );
  const count = components.length;
  const blank = () => components.map(() => new Float64Array(suite.size).fill(NaN));
  const [shares, low, high] = [blank(), blank(), blank()];
  const chiSquare = new Float64Array(suite.size).fill(NaN);
  for (let i = 0; i < suite.size; i++) {
    const observed = Float64Array.from(columns, ({ values }) => values[i]);
    if (observed.some(Number.isNaN)) continue;
    const sigma = Float64Array.from(columns, (column: Column, k) => Math.max(least[k], column.sigma?.[i] || 0));
    const best = solveShares(exact, observed, sigma);
    chiSquare[i] = best.chiSquare;
    best.shares.forEach((share, j) => (shares[j][i] = share));
    const drawn = components.map(() => new Float64Array(draws));
    for (let d = 0; d < draws; d++) {
      if (d % drawsAtATime === 0) {
        await nextTurn();
        signal?.throwIfAborted();
        progress?.(i * draws + d, suite.size * draws);
      }
      const moved = exact.moved((j, symbol) => (components[j].sigma?.[symbol] ?? 0) * random.normal(), ratios);
      solveShares(
        moved,
        observed.map((value, k) => value + sigma[k] * random.normal()),
        sigma,
        best.sticks,
      ).shares.forEach((share, j) => (drawn[j][d] = share));
    }
    for (let j = 0; j < count; j++) {
      const sorted = drawn[j].sort();
      low[j][i] = Math.min(shares[j][i], quantileOfSorted(sorted, 0.025));
      high[j][i] = Math.max(shares[j][i], quantileOfSorted(sorted, 0.975));
    }
  }
  progress?.(suite.size * draws, suite.size * draws);
  const named = (arrays: Float64Array[]) => new Map(components.map(({ name }, j) => [name, arrays[j]]));
  const notes = references.flatMap(({ name, standings }, j) =>
    standings.length > 0 ? [`${components[j].name}: ${name} (values ${standings.join(', ')}).`] : [],
  );
  const detail = {
    components: components.map(({ name }) => name),
    ratios,
    draws,
    seed,
    error: Object.fromEntries(ratios.map((ratio, k) => [ratio, least[k]])),
  };
  const names = components.map(({ name }) => name).join(', ');
  const says = `Mixing proportions of ${names} were solved from ${ratios.join(', ')} with ${draws} Monte Carlo draws (seed ${seed}).`;
  const sources = ['langmuir_1978', ...new Set(references.flatMap((reference) => reference.sources))];
  const lineage = [
    ...suite.lineage,
    step('unmix', detail, {
      sources,
      tables: [...new Set(references.flatMap(({ tables }) => tables))],
      fromMemory: references.flatMap(({ fromMemory }) => fromMemory(ratios.flatMap((ratio) => [ratio, elementOfRatio(ratio)]))),
      says,
    }),
  ];
  const result = {
    samples: suite.samples,
    components: components.map(({ name }) => name),
    ratios,
    shares: named(shares),
    low: named(low),
    high: named(high),
    chiSquare,
    degreesOfFreedom: ratios.length - (count - 1),
    notes,
    lineage,
  };
  return showAs(result, sharesView);
}

function chooseRatios(
  suite: Suite,
  components: readonly MixingComponent[],
  references: readonly { valueOf: (symbol: string) => number | undefined }[],
  wanted: readonly string[] | undefined,
): readonly string[] {
  const lacking = (ratio: string, j: number) => [ratio, elementOfRatio(ratio)].filter((symbol) => references[j].valueOf(symbol) === undefined);
  if (wanted === undefined)
    return Object.keys(isotopeReproducibility).filter((ratio) => suite.has(ratio) && components.every((_, j) => lacking(ratio, j).length === 0));
  for (const ratio of wanted) {
    if (elementOfRatio(ratio) === '') throw new RangeError(`unmix: "${ratio}" is not an isotope ratio such as 87Sr/86Sr.`);
    suite.column(ratio);
    components.forEach(({ name }, j) => {
      if (lacking(ratio, j).length > 0) throw new RangeError(`unmix: component "${name}" has no ${lacking(ratio, j).join(', ')}.`);
    });
  }
  return wanted;
}

/** The components' ratios and concentrations, [ratio][component]. */
class Mixture {
  constructor(
    private readonly ratios: number[][],
    private readonly concentrations: number[][],
  ) {}

  /** The same with every value moved; concentrations stay positive. */
  moved(by: (component: number, symbol: string) => number, names: readonly string[]): Mixture {
    const ratios = this.ratios.map((row, k) => row.map((value, j) => value + by(j, names[k])));
    const concentrations = this.concentrations.map((row, k) =>
      row.map((value, j) => Math.max(value * 1e-3, value + by(j, elementOfRatio(names[k])))),
    );
    return new Mixture(ratios, concentrations);
  }

  mix(shares: ArrayLike<number>, out: Float64Array): void {
    for (let k = 0; k < this.ratios.length; k++) {
      let amount = 0;
      let weighted = 0;
      for (let j = 0; j < shares.length; j++) {
        const part = shares[j] * this.concentrations[k][j];
        amount += part;
        weighted += part * this.ratios[k][j];
      }
      out[k] = weighted / amount;
    }
  }

  get size(): number {
    return this.ratios[0].length;
  }
}

/** Shares from stick lengths in [0, 1]: each takes its part of what the ones before left, so every point of the box is a mixture. */
function sharesOfSticks(sticks: ArrayLike<number>, out: Float64Array): void {
  let left = 1;
  for (let j = 0; j < sticks.length; j++) {
    out[j] = left * sticks[j];
    left -= out[j];
  }
  out[sticks.length] = left;
}

function solveShares(
  mixture: Mixture,
  observed: Float64Array,
  sigma: Float64Array,
  near?: readonly number[],
): { shares: Float64Array; sticks: readonly number[]; chiSquare: number } {
  const free = mixture.size - 1;
  const shares = new Float64Array(mixture.size);
  // The solver wants two data or more: a datum that is always met changes nothing.
  const padded = observed.length < 2;
  const problem: BoundedProblem = {
    predict: (sticks, out) => {
      sharesOfSticks(sticks, shares);
      mixture.mix(shares, out);
      if (padded) out[1] = 0;
    },
    observed: padded ? Float64Array.of(observed[0], 0) : observed,
    sigma: padded ? Float64Array.of(sigma[0], 1) : sigma,
    lower: new Array<number>(free).fill(0),
    upper: new Array<number>(free).fill(1),
  };
  const starts =
    near !== undefined
      ? [near]
      : [0.05, 0.35, 0.65, 0.95].flatMap((a) => (free === 1 ? [[a]] : [0.1, 0.5, 0.9].map((b) => [a, ...new Array<number>(free - 1).fill(b)])));
  let best = fitWithinBounds(problem, starts[0]);
  for (const start of starts.slice(1)) {
    const found = fitWithinBounds(problem, start);
    if (found.chiSquare < best.chiSquare) best = found;
  }
  sharesOfSticks(best.parameters, shares);
  return { shares: shares.slice(), sticks: best.parameters, chiSquare: best.chiSquare };
}

function sharesView(result: Omit<MixingShares, keyof Showable>): TableView {
  const percent = (value: number) => Number((100 * value).toPrecision(3));
  const solved = [...result.chiSquare.keys()].filter((i) => !Number.isNaN(result.chiSquare[i]));
  const unsolved = result.samples.length - solved.length;
  return {
    title: `Mixing proportions from ${result.ratios.join(', ')} (% by weight, 95 % intervals)`,
    columns: ['sample', ...result.components, ...(result.degreesOfFreedom > 0 ? ['χ²'] : [])],
    rows: solved.slice(0, 60).map((i) => [
      result.samples[i],
      ...result.components.map((name) => {
        const [share, low, high] = [result.shares, result.low, result.high].map((of) => of.get(name)![i]);
        return `${percent(share)} (${percent(low)}–${percent(high)})`;
      }),
      ...(result.degreesOfFreedom > 0 ? [Number(result.chiSquare[i].toPrecision(3))] : []),
    ]),
    totalRows: solved.length,
    notes: [...result.notes, ...(unsolved > 0 ? [`${unsolved} samples without all of the ratios.`] : [])],
  };
}
