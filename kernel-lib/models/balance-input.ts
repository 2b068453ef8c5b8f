import { majorOxides } from '../chemistry';
import { volatileFree, withTotalIron } from '../recast';
import { step, type Suite } from '../suite';
import type { BalanceProblem } from './balance-solver';
import { chooseMineral, type ChosenMineral, type MineralChoice } from './minerals';
import { amountOf, errorOf, oneAnalysis, type Composition } from './one-analysis';

/** A solid solution left free between two compositions; where it settles is part of the answer. */
export interface MineralRange {
  /** Its two ends. (A list rather than a pair, so that a range written in a constant of its own passes the type check of a cell.) */
  readonly between: readonly MineralChoice[];
}

/** Phases of a mass balance, by name. */
export type BalanceMinerals = Readonly<Record<string, MineralChoice | MineralRange | undefined>>;

/** How analytical errors are taken. */
export type BalanceErrors = 'equal' | { readonly relative: number; readonly floor?: number } | Readonly<Record<string, number>>;

/** What the mass-balance functions share. */
export interface BalanceOptions {
  /** The more primitive analysis. */
  readonly parent: Composition;
  /** The more evolved analysis. */
  readonly daughter: Composition;
  /** Rock taken in on the way, where there is one. */
  readonly assimilant?: Composition;
  /**
   * 1σ of both analyses: relative with a floor in wt %, or wt % by oxide, or `equal` weights (no chi-square, no intervals). Default: the
   * columns' own 1σ, and where there is none 1 % of the value with a floor of 0.03 wt %. Relative errors and the columns' own are those of the analyses as
   * they were measured, and are carried through the recast; errors by oxide are those on the basis of the balance.
   */
  readonly errors?: BalanceErrors;
  /** `volatile-free` (default): both analyses to 100 % free of volatiles, all iron as FeO. `as given`: only the iron is put together. */
  readonly basis?: 'volatile-free' | 'as given';
  /** `exact` (default): masses add up to the parent's. `free`: the daughter's share is an unknown of its own. */
  readonly closure?: 'exact' | 'free';
  /** Oxides to use (default: all ten majors that both analyses hold). */
  readonly oxides?: readonly string[];
}

/** @internal One column of the problem: a fixed phase, or one end of a range. */
export interface PhaseColumn {
  readonly phase: string;
  readonly chosen: ChosenMineral;
  readonly isRange: boolean;
}

/** @internal A mass balance ready to be solved. */
export interface BalanceInput {
  readonly parent: Suite;
  readonly daughter: Suite;
  readonly assimilant: Suite | undefined;
  readonly oxides: readonly string[];
  readonly columns: readonly PhaseColumn[];
  readonly problem: BalanceProblem;
  readonly errorModel: string;
  readonly hasErrors: boolean;
  readonly notes: readonly string[];
}

const usualRelative = 0.01;
const usualFloor = 0.03;

function onBasis(analysis: Suite, basis: BalanceOptions['basis'], who: string, argument: string): Suite {
  if (basis === 'as given') return withTotalIron(analysis);
  const recast = volatileFree(analysis);
  if (!Number.isFinite(recast.values('SumAsGiven')[0])) {
    throw new RangeError(
      `${who}: ${argument} lacks an oxide that the volatile-free sum needs (SiO2, Al2O3, MgO, CaO, Na2O, K2O, iron). It holds: ` +
        `${analysis.analytes.join(', ')}.`,
    );
  }
  return recast;
}

/** Every form in which an analysis may hold its majors. */
const measuredForms = [...majorOxides, 'FeO', 'Fe2O3', 'Fe2O3T'];

function isRelative(errors: BalanceErrors): errors is { readonly relative: number; readonly floor?: number } {
  return typeof errors === 'object' && 'relative' in errors;
}

function checkErrors(errors: BalanceErrors | undefined, who: string): void {
  if (errors === undefined || errors === 'equal') return;
  if (typeof errors !== 'object' || errors === null) {
    throw new TypeError(`${who}: errors must be "equal", { relative, floor }, or 1σ in wt % by oxide.`);
  }
  if (!isRelative(errors)) return;
  const { relative, floor = usualFloor } = errors;
  if (!(relative > 0 && relative < 1) || !(floor >= 0)) {
    throw new RangeError(`${who}: errors.relative must be a fraction between 0 and 1 (0.01 is 1 %), floor a number of wt % of zero or more.`);
  }
}

/** The analysis with 1σ on its majors as they were measured, so that recasting carries them on; and how many of them were assumed. */
function withErrors(analysis: Suite, errors: BalanceErrors | undefined): { analysis: Suite; assumed: number } {
  if (errors !== undefined && (errors === 'equal' || !isRelative(errors))) return { analysis, assumed: 0 };
  const { relative, floor = usualFloor } = errors ?? { relative: usualRelative };
  let assumed = 0;
  const columns = measuredForms.flatMap((symbol) => {
    const column = analysis.columns.get(symbol);
    if (column === undefined || !Number.isFinite(column.values[0])) return [];
    const own = column.sigma?.[0] ?? NaN;
    if (errors === undefined && own > 0) return [];
    assumed++;
    return [{ ...column, sigma: Float64Array.of(Math.max(floor, relative * column.values[0], 1e-9)) }];
  });
  return { analysis: analysis.with(columns, step('massBalance.errors', { relative, floor, on: columns.map(({ symbol }) => symbol) })), assumed };
}

function describeErrors(errors: BalanceErrors | undefined, assumed: number, measured: number): string {
  if (errors === 'equal') return 'equal weights';
  if (errors !== undefined && !isRelative(errors)) return '1σ as given by oxide';
  const { relative, floor = usualFloor } = errors ?? { relative: usualRelative };
  const usual = `1σ of ${Number((100 * relative).toPrecision(6))} % with a floor of ${floor} wt %`;
  if (errors !== undefined) return usual;
  return assumed === 0
    ? 'the analyses’ own 1σ'
    : assumed === measured
      ? `${usual} assumed`
      : `the analyses’ own 1σ; ${usual} assumed for ${assumed} values without`;
}

/** Variances of both analyses on the basis of the balance. */
function variancesOf(errors: BalanceErrors | undefined, oxides: readonly string[], analyses: readonly Suite[], who: string): Float64Array[] {
  if (errors === 'equal') return [new Float64Array(oxides.length).fill(1), new Float64Array(oxides.length)];
  if (errors === undefined || isRelative(errors)) {
    return analyses.map((analysis) => Float64Array.from(oxides, (oxide) => Math.max(1e-9, errorOf(analysis, oxide)) ** 2));
  }
  const lacking = oxides.filter((oxide) => !(errors[oxide] > 0));
  if (lacking.length > 0) throw new RangeError(`${who}: errors must hold a positive 1σ (wt %) for ${lacking.join(', ')}.`);
  return analyses.map(() => Float64Array.from(oxides, (oxide) => errors[oxide] ** 2));
}

/** @internal The columns of the phases of a mass balance: two for a range. */
export function readPhaseColumns(minerals: BalanceMinerals | undefined, who: string): readonly PhaseColumn[] {
  if (typeof minerals !== 'object' || minerals === null || Object.keys(minerals).length === 0) {
    throw new TypeError(`${who}: minerals must name at least one phase, such as { olivine: 'Fo80', plagioclase: { between: ['An50', 'An90'] } }.`);
  }
  return Object.entries(minerals).flatMap(([phase, choice]): PhaseColumn[] => {
    if (typeof choice === 'object' && choice !== null && 'between' in choice) {
      const ends = (choice as MineralRange).between;
      if (!Array.isArray(ends) || ends.length !== 2) throw new RangeError(`${who}: minerals.${phase}.between must hold two compositions.`);
      return ends.map((end) => ({ phase, chosen: chooseMineral(phase, end, who), isRange: true }));
    }
    return [{ phase, chosen: chooseMineral(phase, choice as MineralChoice | undefined, who), isRange: false }];
  });
}

/** @internal Reads and checks everything a mass balance needs. */
export function readBalance(options: BalanceOptions, minerals: BalanceMinerals, who: string): BalanceInput {
  if (typeof options !== 'object' || options === null) throw new TypeError(`${who}: give an object of options with parent, daughter and minerals.`);
  const { basis = 'volatile-free', closure = 'exact' } = options;
  if (basis !== 'volatile-free' && basis !== 'as given')
    throw new RangeError(`${who}: basis must be "volatile-free" or "as given", not "${String(basis)}".`);
  if (closure !== 'exact' && closure !== 'free') throw new RangeError(`${who}: closure must be "exact" or "free", not "${String(closure)}".`);
  checkErrors(options.errors, who);
  let [assumed, measured] = [0, 0];
  const read = (from: Composition, argument: string) => {
    const known = withErrors(oneAnalysis(from, who, argument), options.errors);
    assumed += known.assumed;
    measured += measuredForms.filter((symbol) => Number.isFinite(known.analysis.columns.get(symbol)?.values[0])).length;
    return onBasis(known.analysis, basis, who, argument);
  };
  const parent = read(options.parent, 'parent');
  const daughter = read(options.daughter, 'daughter');
  const assimilant = options.assimilant === undefined ? undefined : read(options.assimilant, 'assimilant');
  const all = [parent, daughter, ...(assimilant === undefined ? [] : [assimilant])];
  const usable = (oxide: string) => all.every((analysis) => Number.isFinite(amountOf(analysis, oxide)));
  const wanted = options.oxides ?? majorOxides;
  const notes: string[] = [];
  const oxides = wanted.filter(usable);
  const left = wanted.filter((oxide) => !usable(oxide));
  if (left.length > 0 && options.oxides !== undefined)
    throw new RangeError(`${who}: oxides holds ${left.join(', ')}, which not all of the analyses have.`);
  if (left.length > 0) notes.push(`Not used, because an analysis has no usable value: ${left.join(', ')}.`);
  const columns = readPhaseColumns(minerals, who);
  const k = columns.length + (assimilant === undefined ? 0 : 1);
  if (oxides.length < k + (closure === 'free' ? 1 : 0))
    throw new RangeError(`${who}: ${k} unknowns need at least as many oxides; there are ${oxides.length} (${oxides.join(', ')}).`);
  const n = oxides.length;
  const phases = new Float64Array(k * n);
  columns.forEach(({ chosen }, j) => oxides.forEach((oxide, i) => (phases[j * n + i] = chosen.oxides.get(oxide) ?? 0)));
  if (assimilant !== undefined) oxides.forEach((oxide, i) => (phases[(k - 1) * n + i] = amountOf(assimilant, oxide)));
  const signs = new Float64Array(k).fill(1);
  if (assimilant !== undefined) signs[k - 1] = -1;
  const variances = variancesOf(options.errors, oxides, [parent, daughter], who);
  const values = (analysis: Suite) => Float64Array.from(oxides, (oxide) => amountOf(analysis, oxide));
  return {
    parent,
    daughter,
    assimilant,
    oxides,
    columns,
    errorModel: describeErrors(options.errors, assumed, measured),
    hasErrors: options.errors !== 'equal',
    notes,
    problem: {
      n,
      k,
      parent: values(parent),
      daughter: values(daughter),
      phases,
      signs,
      parentVariance: variances[0],
      daughterVariance: variances[1],
      closure: closure === 'exact',
    },
  };
}
