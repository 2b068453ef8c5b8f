import { equilibriumLiquid, rayleighLiquid, seededRandom } from '../chemistry';
import { showAs, type Showable, type TableCell } from '../display';
import { derivedColumn, step, suiteOf, type Suite, type Traced } from '../suite';
import { recordCoefficients, sourcesOf, type UsedCoefficient } from './coefficients';
import { recalledCoefficients } from './in-words';
import type { CrystalliseOptions } from './crystallise';
import { errorOf } from './one-analysis';
import { describeCoefficients, evenly } from './path';
import { readNumber, setUpTrace } from './trace-setup';

/** What `spreadOfPath` takes besides what `crystallise` does. */
export interface PathSpreadOptions extends CrystalliseOptions {
  /** Draws (default 2000) and their seed (default 1). */
  readonly draws?: number;
  readonly seed?: number;
  /** Relative 1σ of the start where it has none of its own (default 0.05). */
  readonly startError?: number;
  /** Absolute 1σ of each mineral's share in the assemblage (default 0.03). */
  readonly shareError?: number;
  /** Least relative half-width of a coefficient's range (default 0.25). */
  readonly leastSpread?: number;
  /** Stops the work: the promise is rejected with the signal's reason. */
  readonly signal?: AbortSignal;
  /** Called now and then with draws done and draws in all. */
  readonly progress?: (done: number, total: number) => void;
}

/** How far a crystallisation path is known. */
export interface PathSpread extends Traced, Showable {
  readonly F: Float64Array;
  /** The 2.5 %, 50 % and 97.5 % quantiles of the liquid at each step (ppm, n rows each). */
  readonly low: Suite;
  readonly median: Suite;
  readonly high: Suite;
  readonly coefficients: readonly UsedCoefficient[];
  readonly notes: readonly string[];
}

/** Time between two breaths of the event loop, in ms. */
const breath = 15;

/**
 * Monte Carlo of a crystallisation path: coefficients drawn over their published ranges, start and assemblage over their errors.
 *
 * @param options those of `crystallise`; `draws` (default 2000), `seed`, `startError`, `shareError`, `leastSpread`; `signal` to interrupt, `progress`
 * @returns quantiles of the liquid along F (steps + 1 rows, ppm)
 * @throws MissingCoefficientsError; RangeError naming the bad argument; the signal's reason when interrupted
 * @source Neumann et al. 1954; Gast 1968; Shaw 1970. Coefficients are drawn evenly in their logarithm between least and greatest published value
 * @example await spreadOfPath({ from: { Sr: 520, Ba: 210 }, assemblage: { olivine: 0.2, plagioclase: 0.8 }, downTo: 0.5 })
 */
export async function spreadOfPath(options: PathSpreadOptions): Promise<PathSpread> {
  const who = 'spreadOfPath';
  const setup = setUpTrace(options, who);
  const downTo = readNumber(options.downTo, who, 'downTo', { from: 0, to: 1, open: 'both' });
  const mode = options.mode ?? 'rayleigh';
  if (mode !== 'rayleigh' && mode !== 'equilibrium') throw new RangeError(`${who}: mode must be "rayleigh" or "equilibrium", not "${String(mode)}".`);
  const draws = readNumber(options.draws ?? 2000, who, 'draws', { from: 10, to: 1e6 });
  if (!Number.isInteger(draws)) throw new RangeError(`${who}: draws is ${draws}; give a whole number.`);
  const startError = readNumber(options.startError ?? 0.05, who, 'startError', { from: 0, to: 1, open: 'to' });
  const shareError = readNumber(options.shareError ?? 0.03, who, 'shareError', { from: 0, to: 1, open: 'to' });
  const leastSpread = readNumber(options.leastSpread ?? 0.25, who, 'leastSpread', { from: 0, to: 1, open: 'to' });
  const random = seededRandom(options.seed ?? 1, who);
  const shares = Object.values(setup.detail.assemblage);
  const [A, M] = [setup.analytes.length, shares.length];
  const F = evenly(1, downTo, setup.steps);
  const law = mode === 'rayleigh' ? rayleighLiquid : equilibriumLiquid;
  // used is mineral by mineral, analyte by analyte.
  const ranges = setup.used.map(({ value, low, high }) => [
    Math.log(Math.max(1e-9, Math.min(low, value * (1 - leastSpread)))),
    Math.log(Math.max(1e-9, high, value * (1 + leastSpread))),
  ]);
  const spread = setup.analytes.map((symbol, a) => {
    const own = errorOf(setup.start, symbol);
    return own > 0 ? own / setup.amounts[a] : startError;
  });
  const drawn = new Float64Array(draws * A * F.length);
  const mass = new Float64Array(M);
  let since = performance.now();
  for (let d = 0; d < draws; d++) {
    if (options.signal?.aborted) throw options.signal.reason;
    let sum = 0;
    for (let m = 0; m < M; m++) sum += mass[m] = Math.max(0, shares[m] + shareError * random.normal());
    for (let a = 0; a < A; a++) {
      let D = 0;
      for (let m = 0; m < M; m++) {
        const [low, high] = ranges[m * A + a];
        D += (sum > 0 ? mass[m] / sum : shares[m]) * (setup.used[m * A + a].value === 0 ? 0 : Math.exp(low + (high - low) * random.uniform()));
      }
      const start = setup.amounts[a] * Math.exp(spread[a] * random.normal());
      for (let i = 0; i < F.length; i++) drawn[(a * F.length + i) * draws + d] = start * law(D, F[i]);
    }
    if (performance.now() - since > breath) {
      options.progress?.(d + 1, draws);
      await new Promise((resume) => setImmediate(resume));
      since = performance.now();
    }
  }
  options.progress?.(draws, draws);
  const because = step(
    who,
    {
      ...setup.detail,
      downTo,
      mode,
      draws,
      seed: options.seed ?? 1,
      startError,
      shareError,
      leastSpread,
      coefficients: recordCoefficients(setup.used),
    },
    {
      sources: [...new Set([...(mode === 'rayleigh' ? ['neumann_1954', 'gast_1968'] : ['shaw_1970']), ...sourcesOf(setup.used)])],
      tables: ['partition-coefficients.csv'],
      fromMemory: recalledCoefficients(setup.used),
      says: `The path was drawn ${draws} times with coefficients over their published ranges (seed ${options.seed ?? 1}).`,
    },
  );
  const lineage = [...setup.start.lineage, because];
  const at = (quantile: number): Suite =>
    suiteOf({
      columns: [
        derivedColumn('F', F.slice(), ''),
        ...setup.analytes.map((symbol, a) =>
          derivedColumn(
            symbol,
            F.map((_, i) => sorted(a, i)[Math.round(quantile * (draws - 1))]),
            'ppm',
            undefined,
            'element',
          ),
        ),
      ],
      labels: { sample: Array.from(F, (value) => `F = ${Number(value.toFixed(4))}`) },
      lineage,
    });
  // Each step's draws stand together, so they are sorted in place once.
  const done = new Uint8Array(A * F.length);
  const sorted = (a: number, i: number): Float64Array => {
    const cell = a * F.length + i;
    const values = drawn.subarray(cell * draws, (cell + 1) * draws);
    if (done[cell] === 0) values.sort();
    done[cell] = 1;
    return values;
  };
  const [low, median, high] = [0.025, 0.5, 0.975].map(at);
  return showAs({ F, low, median, high, coefficients: setup.used, notes: setup.notes, lineage }, (it) => ({
    title: `Liquid at F = ${downTo}: median and 95 % range of ${draws} draws`,
    columns: ['Element', 'Start (ppm)', 'from', 'median', 'to'],
    rows: setup.analytes.map((symbol, a): TableCell[] => [
      symbol,
      setup.amounts[a],
      ...[it.low, it.median, it.high].map((suite) => suite.values(symbol)[F.length - 1]),
    ]),
    notes: [
      ...it.notes,
      ...describeCoefficients(it.coefficients),
      `Coefficients over their published ranges, at least ±${100 * leastSpread} %; start ±${100 * startError} % where it has no 1σ of its ` +
        `own; shares ±${shareError}.`,
    ],
  }));
}
