import { findAnalyte } from '../chemistry';
import { showAs, type Showable, type TableCell } from '../display';
import { step, type Suite, type Traced } from '../suite';
import { recalledCoefficients } from './in-words';
import { coefficientRange, meltTypes, partitionMinerals, type MeltType } from '../tables';
import {
  checkOwnCoefficients,
  findCoefficient,
  MissingCoefficientsError,
  readMeltTypes,
  recordCoefficients,
  sourcesOf,
  type MissingCoefficient,
  type OwnCoefficients,
  type UsedCoefficient,
} from './coefficients';
import type { MassBalance } from './mass-balance';
import { compareRatios, judgeTraces } from './trace-verdict';
import { amountOf, errorOf } from './one-analysis';
import { describeCoefficients } from './path';
import { readNumber } from './trace-setup';

/** What `testTraces` takes. */
export interface TraceTestOptions {
  /** `rayleigh` (default) or `equilibrium`. */
  readonly mode?: 'rayleigh' | 'equilibrium';
  /**
   * Sets whose coefficients span the ranges, in order of preference. Default: from the set of the parent's silica to that of the daughter's;
   * a coefficient that these lack is borrowed from the nearest set that has it, and the notes say so.
   */
  readonly meltTypes?: MeltType | readonly MeltType[];
  /** Elements to test (default: all that both analyses hold and every crystal has a coefficient for). A list stops at a missing one. */
  readonly analytes?: readonly string[];
  /** Coefficients of your own; they are taken as exact but for `leastSpread`. */
  readonly coefficients?: OwnCoefficients;
  /** Relative 1σ of an element without one of its own (default 0.05). */
  readonly relativeError?: number;
  /**
   * Least relative half-width of a coefficient's range (default 0.25). A coefficient that the tables hold once has no range of its own, yet
   * is not known exactly.
   */
  readonly leastSpread?: number;
  /** Relative 1σ of isotope ratios, at least (default 0.00003 for Sr, Nd and Hf, 0.001 for Pb and Os). */
  readonly ratioError?: number;
}

/** One isotope ratio of the test: crystallisation in a closed system leaves it as it is. */
export interface TraceTestRatio {
  readonly ratio: string;
  readonly parent: number;
  readonly daughter: number;
  /** Daughter less parent, in 1σ of both together. */
  readonly off: number;
}

/** One element of the test (ppm). */
export interface TraceTestElement {
  readonly element: string;
  readonly parent: number;
  readonly observed: number;
  readonly observedSigma: number;
  /** With the preferred coefficients and the best solution. */
  readonly predicted: number;
  /** Least and greatest over the coefficients' ranges and the solution's 95 % interval. */
  readonly low: number;
  readonly high: number;
  /** Bulk coefficient: preferred, least, greatest. */
  readonly bulk: number;
  readonly bulkLow: number;
  readonly bulkHigh: number;
  /** How far outside its range the observed value is, in 1σ of both analyses together (0 inside; negative below). */
  readonly outside: number;
  /**
   * `agrees`; `disagrees` (more than 2σ outside); `too wide` (inside a range that spans more than a factor
   * of three and does not tell whether the element rises or falls).
   */
  readonly finding: 'agrees' | 'disagrees' | 'too wide';
}

/** Whether the traces bear out a mass balance. */
export interface TraceTest extends Traced, Showable {
  readonly verdict: 'accepted' | 'rejected' | 'undecided';
  /** The verdict in words, with the elements that decide it. */
  readonly why: string;
  readonly elements: readonly TraceTestElement[];
  readonly ratios: readonly TraceTestRatio[];
  readonly coefficients: readonly UsedCoefficient[];
  /** Coefficients that kept an element out of the test. */
  readonly missing: readonly MissingCoefficient[];
  readonly notes: readonly string[];
}

/** Limits of silica (wt %, volatile-free) between basalt, andesite, dacite and rhyolite sets: common practice, after the IUGS names. */
export const silicaOfMeltTypes: readonly { readonly below: number; readonly set: MeltType }[] = [
  { below: 52, set: 'basalt' },
  { below: 63, set: 'andesite' },
  { below: 69, set: 'dacite' },
  { below: Infinity, set: 'rhyolite' },
];

/** @internal The set of coefficients that goes with a silica content. */
export function meltTypeOf(silica: number): MeltType {
  return silicaOfMeltTypes.find(({ below }) => silica < below)!.set;
}

function setsBetween(parent: Suite, daughter: Suite): readonly MeltType[] {
  const places = [parent, daughter].map((analysis) => meltTypes.indexOf(meltTypeOf(amountOf(analysis, 'SiO2'))));
  return meltTypes.slice(Math.min(...places), Math.max(...places) + 1);
}

/** The other lavas' sets, nearest first. */
function nearestTo(sets: readonly MeltType[]): readonly MeltType[] {
  const distance = (type: MeltType) => Math.min(...sets.map((set) => Math.abs(meltTypes.indexOf(type) - meltTypes.indexOf(set))));
  return silicaOfMeltTypes
    .map(({ set }) => set)
    .filter((set) => !sets.includes(set))
    .sort((a, b) => distance(a) - distance(b));
}

/** The preferred coefficient with the range over all the sets, widened to the least spread. */
function ranged(
  mineral: string,
  element: string,
  sets: readonly MeltType[],
  spare: readonly MeltType[],
  own: OwnCoefficients,
  leastSpread: number,
): UsedCoefficient | undefined {
  const preferred = findCoefficient(mineral, element, [...sets, ...spare], own);
  if (preferred === undefined) return undefined;
  let { low, high } = preferred;
  if (preferred.standing !== 'supplied') {
    for (const set of sets) {
      const range = coefficientRange(mineral, set, element);
      if (range === undefined) continue;
      low = Math.min(low, range.low);
      high = Math.max(high, range.high);
    }
  }
  return { ...preferred, low: Math.min(low, preferred.value * (1 - leastSpread)), high: Math.max(high, preferred.value * (1 + leastSpread)) };
}

const law = { rayleigh: (D: number, F: number) => F ** (D - 1), equilibrium: (D: number, F: number) => 1 / (F + D * (1 - F)) } as const;
const factorTooWide = 3;
const share = (values: readonly number[], p: number) => values[Math.min(values.length - 1, Math.max(0, Math.round(p * (values.length - 1))))];

/**
 * Tests a mass balance with trace elements: predicted against observed for every element, over the published range of its coefficients and
 * the solution's own uncertainty.
 *
 * Rejected: an element more than 3σ outside its range, or more than one in ten (and more than one) beyond 2σ, or majors that do not fit
 * (probability below 1 %), or an isotope ratio that moved by more than 3σ. Accepted: no such thing, and at least four elements agree with ranges
 * narrow enough to tell, one that the crystals take up (D > 1) and one that they do not (D < 0.5) among them. Otherwise undecided. The rule is the
 * library's own.
 *
 * @param balance a solved mass balance whose parent and daughter hold elements in ppm (oxides are left to the majors)
 * @param options `mode`, `meltTypes`, `analytes`, `coefficients`, `relativeError`, `leastSpread`
 * @returns the verdict in words, and each element's prediction with its range (ppm)
 * @throws MissingCoefficientsError for an element asked for by name; RangeError naming the bad argument
 * @source Neumann et al. 1954; Shaw 1970
 * @example testTraces(massBalance({ parent, daughter, minerals })).why
 */
export function testTraces(balance: MassBalance, options: TraceTestOptions = {}): TraceTest {
  const who = 'testTraces';
  if (typeof balance !== 'object' || balance === null || !Array.isArray(balance.phases) || balance.parent === undefined)
    throw new TypeError(`${who}: give a solved mass balance, as massBalance returns it.`);
  const { mode = 'rayleigh', coefficients: own = {} } = options;
  if (mode !== 'rayleigh' && mode !== 'equilibrium') throw new RangeError(`${who}: mode must be "rayleigh" or "equilibrium", not "${String(mode)}".`);
  const relativeError = readNumber(options.relativeError ?? 0.05, who, 'relativeError', { from: 0, to: 1, open: 'both' });
  const leastSpread = readNumber(options.leastSpread ?? 0.25, who, 'leastSpread', { from: 0, to: 1, open: 'to' });
  if (balance.phases.some(({ phase }) => phase === 'assimilant'))
    throw new RangeError(`${who}: this balance takes in an assimilant; compare with assimilate(…) instead.`);
  checkOwnCoefficients(own, who);
  const { parent, daughter } = balance;
  const sets = options.meltTypes === undefined ? setsBetween(parent, daughter) : readMeltTypes(options.meltTypes, who);
  const spare = options.meltTypes === undefined ? nearestTo(sets) : [];
  const usable = (symbol: string) => amountOf(parent, symbol) > 0 && amountOf(daughter, symbol) > 0;
  for (const symbol of options.analytes ?? [])
    if (!usable(symbol)) throw new RangeError(`${who}: analytes holds ${symbol}, which parent and daughter do not both have above zero.`);
  const candidates = options.analytes ?? parent.analytes.filter((symbol) => findAnalyte(symbol)?.kind === 'element' && usable(symbol));
  const crystals = balance.phases.flatMap((phase, j) => (phase.value > 0 ? [{ ...phase, column: j + 1 }] : []));
  const known = partitionMinerals();
  const noTable = crystals.filter(({ mineral }) => !known.includes(mineral) && !Object.hasOwn(own, mineral)).map(({ mineral }) => mineral);
  if (noTable.length > 0) throw new RangeError(`${who}: there are no coefficients for ${noTable.join(', ')}; supply them in options.coefficients.`);

  const missing: MissingCoefficient[] = [];
  const used: UsedCoefficient[] = [];
  const elements: TraceTestElement[] = [];
  const width = balance.phases.length + 1;
  const rows = balance.draws.length / width;
  for (const element of candidates) {
    const found = crystals.map(({ mineral }) => ranged(mineral, element, sets, spare, own, leastSpread));
    if (found.some((each) => each === undefined)) {
      crystals.forEach(({ mineral }, m) => found[m] === undefined && missing.push({ mineral, analyte: element, meltTypes: sets, hint: '' }));
      continue;
    }
    const K = found as UsedCoefficient[];
    used.push(...K);
    const bulk = (pick: 'value' | 'low' | 'high', mass: (j: number) => number) => {
      let [sum, total] = [0, 0];
      crystals.forEach(({ column }, m) => {
        sum += K[m][pick] * mass(column);
        total += mass(column);
      });
      return total > 0 ? sum / total : 0;
    };
    const best = (column: number) => balance.phases[column - 1].value;
    const start = amountOf(parent, element);
    const liquid = (D: number, F: number) => start * law[mode](D, Math.max(F, 1e-3));
    const F = balance.F.value;
    const predicted = liquid(bulk('value', best), F);
    const lows = [liquid(bulk('high', best), F)];
    const highs = [liquid(bulk('low', best), F)];
    for (let d = 0; d < rows; d++) {
      const mass = (column: number) => balance.draws[d * width + column];
      lows.push(liquid(bulk('high', mass), balance.draws[d * width]));
      highs.push(liquid(bulk('low', mass), balance.draws[d * width]));
    }
    lows.sort((a, b) => a - b);
    highs.sort((a, b) => a - b);
    const low = Math.min(predicted, share(lows, 0.025));
    const high = Math.max(predicted, share(highs, 0.975));
    const observed = amountOf(daughter, element);
    const sigmaOf = (analysis: Suite) => (errorOf(analysis, element) > 0 ? errorOf(analysis, element) / amountOf(analysis, element) : relativeError);
    const relative = Math.hypot(sigmaOf(parent), sigmaOf(daughter));
    const outside = observed > high ? Math.log(observed / high) / relative : observed < low ? Math.log(observed / low) / relative : 0;
    elements.push({
      element,
      parent: start,
      observed,
      observedSigma: sigmaOf(daughter) * observed,
      predicted,
      low,
      high,
      bulk: bulk('value', best),
      bulkLow: bulk('low', best),
      bulkHigh: bulk('high', best),
      outside,
      finding: Math.abs(outside) > 2 ? 'disagrees' : high / low > factorTooWide && low <= start && start <= high ? 'too wide' : 'agrees',
    });
  }
  if (missing.length > 0 && options.analytes !== undefined)
    throw new MissingCoefficientsError(
      who,
      missing,
      elements.map(({ element }) => element),
    );
  const ratios = compareRatios(
    parent,
    daughter,
    options.ratioError === undefined ? undefined : readNumber(options.ratioError, who, 'ratioError', { from: 0, to: 1, open: 'both' }),
  );
  const { verdict, why } = judgeTraces(balance, elements, ratios);
  const borrowed = used.filter(({ meltType }) => meltType !== 'supplied' && !sets.includes(meltType));
  const notes = [
    `Coefficients of ${sets.join(' to ')} melts; each range is widened to at least ±${100 * leastSpread} %. Elements without 1σ of their ` +
      `own: ${100 * relativeError} %.`,
    ...(borrowed.length > 0
      ? [
          `Borrowed from another melt’s set: ` +
            `${borrowed.map(({ mineral, analyte, meltType }) => `${analyte} in ${mineral} (${meltType})`).join(', ')}.`,
        ]
      : []),
    ...(missing.length > 0
      ? [
          `Not tested, because a coefficient is missing (supply it in options.coefficients): ` +
            `${[...new Set(missing.map(({ mineral, analyte }) => `${analyte} in ${mineral}`))].join(', ')}.`,
        ]
      : []),
  ];
  const because = step(
    who,
    { mode, meltTypes: [...sets], relativeError, leastSpread, verdict, coefficients: recordCoefficients(used) },
    { sources: [...new Set([mode === 'rayleigh' ? 'neumann_1954' : 'shaw_1970', ...sourcesOf(used)])], tables: ['partition-coefficients.csv'], fromMemory: recalledCoefficients(used), says: `Trace elements of the daughter were predicted from the mass balance and held against the analysis: ${verdict}.` },
  );
  return showAs({ verdict, why, elements, ratios, coefficients: used, missing, notes, lineage: [...balance.lineage, because] }, (it) => ({
    title: it.why,
    columns: ['Element', 'Parent (ppm)', 'Observed (ppm)', '1σ', 'Predicted (ppm)', 'from', 'to', 'D', 'D from', 'D to', 'Outside by (σ)', 'Finding'],
    rows: it.elements.map((each): TableCell[] => [
      each.element,
      each.parent,
      each.observed,
      each.observedSigma,
      each.predicted,
      each.low,
      each.high,
      each.bulk,
      each.bulkLow,
      each.bulkHigh,
      each.outside,
      each.finding,
    ]),
    notes: [
      ...(it.ratios.length > 0
        ? [`Isotope ratios, daughter less parent: ${it.ratios.map(({ ratio, off }) => `${ratio} ${off.toFixed(1)}σ`).join(', ')}.`]
        : []),
      ...it.notes,
      ...describeCoefficients(it.coefficients),
    ],
  }));
}
