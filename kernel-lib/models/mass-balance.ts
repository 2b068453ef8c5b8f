import { jStat } from 'jstat';
import { seededRandom } from '../chemistry';
import { showAs, type Showable, type TableCell } from '../display';
import { step, type Suite, type Traced } from '../suite';
import { molarMass } from '../tables';
import { BalanceSolver, type BalanceProblem } from './balance-solver';
import { readBalance, type BalanceInput, type BalanceMinerals, type BalanceOptions } from './balance-input';
import { recalledMinerals } from './in-words';
import type { ChosenMineral } from './minerals';
import { joinLineage } from './one-analysis';
import { readNumber } from './trace-setup';

/** What `massBalance` takes. */
export interface MassBalanceOptions extends BalanceOptions {
  /** The phases that may have left the parent: a composition each, or a range of a solid solution. */
  readonly minerals: BalanceMinerals;
  /** Draws of the bootstrap on the analytical errors (default 500; 0 for none). */
  readonly draws?: number;
  /** Seed of the draws (default 1). */
  readonly seed?: number;
}

/** One quantity of a solution with its bootstrap interval; NaN where no errors were taken. */
export interface BalanceEstimate {
  readonly value: number;
  readonly sigma: number;
  /** Ends of the 95 % interval. */
  readonly low: number;
  readonly high: number;
}

/** One phase of a solution. */
export interface BalancePhase extends BalanceEstimate {
  /** What the user called it; `value` is its mass relative to the parent (negative for what was taken in). */
  readonly phase: string;
  /** The mineral that coefficients are looked up under; '' for the assimilant. */
  readonly mineral: string;
  /** Its composition: a label, or where a range settled. */
  readonly label: string;
  /** Mass fraction of the crystals removed (0–1; 0 for the assimilant). */
  readonly ofCrystals: number;
  readonly source: string;
  readonly standing: string;
}

/** How well one oxide is fitted (wt %). */
export interface BalanceResidual {
  readonly oxide: string;
  readonly parent: number;
  readonly fitted: number;
  /** parent − fitted */
  readonly residual: number;
  /** 1σ of the residual from both analyses' errors; NaN with equal weights. */
  readonly sigma: number;
}

/** A solved mass balance: parent = F·daughter + crystals (− assimilant). */
export interface MassBalance extends Traced, Showable {
  /** Mass of the daughter relative to the parent: the liquid left where nothing was taken in. */
  readonly F: BalanceEstimate;
  readonly phases: readonly BalancePhase[];
  readonly residuals: readonly BalanceResidual[];
  /** Σ residual², (wt %)². */
  readonly sumOfSquares: number;
  /** Σ (residual/σ)²; NaN with equal weights. */
  readonly chiSquare: number;
  readonly degreesOfFreedom: number;
  /** Probability of a chi-square at least this large if the balance is true (0–1); NaN with equal weights. */
  readonly probability: number;
  /** Correlation of F and the phases' masses over the draws, in that order; empty without draws. */
  readonly correlation: readonly (readonly number[])[];
  /** Analyses on the basis of the balance. */
  readonly parent: Suite;
  readonly daughter: Suite;
  /** Each draw's F, then each phase's mass, row by row; for tests that build on the solution. */
  readonly draws: Float64Array;
  readonly errorModel: string;
  readonly notes: readonly string[];
}

/** @internal Masses of the phases (ranges joined) from the masses of the columns. */
export function joinColumns(input: BalanceInput, x: ArrayLike<number>): { phases: string[]; masses: number[] } {
  const names = [...new Set(input.columns.map(({ phase }) => phase))];
  const masses = names.map((name) => input.columns.reduce((sum, { phase }, j) => sum + (phase === name ? x[j] : 0), 0));
  if (input.assimilant !== undefined) {
    names.push('assimilant');
    masses.push(-x[input.columns.length]);
  }
  return { phases: names, masses };
}

function labelOf(input: BalanceInput, phase: string, x: ArrayLike<number>): { label: string; mineral: string; source: string; standing: string } {
  const columns = input.columns.flatMap((column, j) => (column.phase === phase ? [{ ...column.chosen, mass: x[j] }] : []));
  if (columns.length === 0) return { label: input.assimilant!.samples[0], mineral: '', source: 'supplied by the user', standing: 'supplied' };
  const { mineral, source, standing } = columns[0];
  return { label: settledLabel(columns.map(({ mass, ...chosen }) => ({ chosen, mass }))), mineral, source, standing };
}

/** @internal The composition of a phase from its columns: its label, or where a range between two compositions settled. */
export function settledLabel(columns: readonly { readonly chosen: Pick<ChosenMineral, 'label' | 'oxides'>; readonly mass: number }[]): string {
  const [first, second] = columns;
  if (second === undefined) return first.chosen.label;
  const total = first.mass + second.mass;
  return total > 0 ? settled(first.chosen, second.chosen, second.mass / total) : `${first.chosen.label}–${second.chosen.label}, not used`;
}

/** Where a range settled: as a point of the solid solution where both ends are (`An71`), else as shares of the ends. */
function settled(
  first: { label: string; oxides: ReadonlyMap<string, number> },
  second: { label: string; oxides: ReadonlyMap<string, number> },
  share: number,
): string {
  const numbers = [/^([A-Za-z]+)(\d+(?:\.\d+)?)$/.exec(first.label), /^([A-Za-z]+)(\d+(?:\.\d+)?)$/.exec(second.label)];
  if (numbers[0] !== null && numbers[1] !== null && numbers[0][1] === numbers[1][1]) {
    const molar = molarFraction(numbers[0][1], first.oxides, second.oxides, share);
    if (molar !== undefined) return `${numbers[0][1]}${molar.toFixed(1)}`;
  }
  return `${Math.round(100 * (1 - share))} % ${first.label}, ${Math.round(100 * share)} % ${second.label}`;
}

function molarFraction(name: string, first: ReadonlyMap<string, number>, second: ReadonlyMap<string, number>, share: number): number | undefined {
  const mixed = (oxide: string) => (1 - share) * (first.get(oxide) ?? 0) + share * (second.get(oxide) ?? 0);
  if (name === 'Fo') {
    const [mg, fe] = [mixed('MgO') / molarMass('MgO'), mixed('FeOT') / molarMass('FeOT')];
    return (100 * mg) / (mg + fe);
  }
  if (name === 'An') {
    const [ca, na] = [mixed('CaO') / molarMass('CaO'), (2 * mixed('Na2O')) / molarMass('Na2O')];
    return (100 * ca) / (ca + na);
  }
  return undefined;
}

/** Masses F, phase by phase, over draws of both analyses around the fitted ones. */
function resample(input: BalanceInput, solver: BalanceSolver, draws: number, seed: number, who: string): Float64Array {
  const { problem } = input;
  const { n, k, parentVariance, daughterVariance } = problem;
  const random = seededRandom(seed, who);
  // The most likely true analyses: each takes its share of the residual.
  const trueParent = problem.parent.slice();
  const trueDaughter = problem.daughter.slice();
  for (let i = 0; i < n; i++) {
    const variance = parentVariance[i] + solver.F ** 2 * daughterVariance[i];
    trueParent[i] -= (solver.residuals[i] * parentVariance[i]) / variance;
    trueDaughter[i] += (solver.residuals[i] * solver.F * daughterVariance[i]) / variance;
  }
  const again = new BalanceSolver(n, k);
  const drawn: BalanceProblem = { ...problem, parent: new Float64Array(n), daughter: new Float64Array(n) };
  const width = joinColumns(input, solver.x).masses.length + 1;
  const rows = new Float64Array(draws * width);
  for (let d = 0; d < draws; d++) {
    for (let i = 0; i < n; i++) {
      drawn.parent[i] = trueParent[i] + Math.sqrt(parentVariance[i]) * random.normal();
      drawn.daughter[i] = trueDaughter[i] + Math.sqrt(daughterVariance[i]) * random.normal();
    }
    again.solve(drawn);
    rows[d * width] = again.F;
    rows.set(joinColumns(input, again.x).masses, d * width + 1);
  }
  return rows;
}

/** Standard deviation and 95 % interval of one column of the draws. */
function spread(rows: Float64Array, width: number, at: number, value: number): BalanceEstimate {
  const draws = rows.length / width;
  if (draws < 2) return { value, sigma: NaN, low: NaN, high: NaN };
  const column = new Float64Array(draws);
  for (let d = 0; d < draws; d++) column[d] = rows[d * width + at];
  column.sort();
  const mean = column.reduce((sum, each) => sum + each, 0) / draws;
  const variance = column.reduce((sum, each) => sum + (each - mean) ** 2, 0) / (draws - 1);
  const quantile = (p: number) => {
    const place = p * (draws - 1);
    const below = Math.floor(place);
    return column[below] + (place - below) * (column[Math.min(below + 1, draws - 1)] - column[below]);
  };
  return { value, sigma: Math.sqrt(variance), low: quantile(0.025), high: quantile(0.975) };
}

function correlations(rows: Float64Array, width: number): readonly (readonly number[])[] {
  const draws = rows.length / width;
  if (draws < 2) return [];
  const means = Array.from({ length: width }, (_, a) => {
    let sum = 0;
    for (let d = 0; d < draws; d++) sum += rows[d * width + a];
    return sum / draws;
  });
  const covariance = (a: number, b: number) => {
    let sum = 0;
    for (let d = 0; d < draws; d++) sum += (rows[d * width + a] - means[a]) * (rows[d * width + b] - means[b]);
    return sum;
  };
  return means.map((_, a) => means.map((__, b) => (a === b ? 1 : covariance(a, b) / Math.sqrt(covariance(a, a) * covariance(b, b)))));
}

/** @internal Degrees of freedom: oxides less fitted masses; with exact closure and complete analyses the sum itself tells nothing. */
export function freedom(input: BalanceInput, solver: BalanceSolver): number {
  return input.problem.n - solver.active - (input.problem.closure ? 0 : 1);
}

/**
 * Least-squares mass balance of majors: parent = F·daughter + Σ minerals (− assimilant), every mass at least zero.
 *
 * Both analyses' errors are used: weights are 1/(σ²parent + F²·σ²daughter). Minerals are taken free of volatiles, all iron as FeO. The 1σ, 95 %
 * intervals and correlations are from a seeded bootstrap on the analytical errors.
 *
 * @param options `parent`, `daughter` one analysis each (oxides in wt %); `minerals` by name: a label (`'An75'`), an analysis, or
 *   `{ between: ['An50', 'An90'] }`; `assimilant`; `errors`; `basis`; `closure`; `oxides`; `draws` (default 500); `seed` (default 1)
 * @returns F, masses and shares of the phases with intervals, residuals by oxide (wt %), ΣR², chi-square with its probability, correlations
 * @throws RangeError or TypeError naming the argument and what is allowed
 * @source Bryan et al. 1969; Wright & Doherty 1970; Bro & De Jong 1997 (non-negative least squares)
 * @example massBalance({ parent: suite.sample('KE-20'), daughter: suite.sample('KE-10'), minerals: { olivine: 'Fo80', clinopyroxene:
 *   'Wo42En46Fs12', plagioclase: { between: ['An50', 'An90'] } } })
 */
export function massBalance(options: MassBalanceOptions): MassBalance {
  const who = 'massBalance';
  const input = readBalance(options, options?.minerals, who);
  const draws = options.draws ?? 500;
  readNumber(draws, who, 'draws', { from: 0, to: 1e6 });
  if (!Number.isInteger(draws) || draws === 1) throw new RangeError(`${who}: draws is ${draws}; give 0 or a whole number of 2 or more.`);
  const seed = options.seed ?? 1;
  const { problem, oxides, hasErrors } = input;
  const solver = new BalanceSolver(problem.n, problem.k);
  solver.solve(problem);
  const rows = hasErrors && draws > 0 ? resample(input, solver, draws, seed, who) : new Float64Array(0);
  const { phases: names, masses } = joinColumns(input, solver.x);
  const width = names.length + 1;
  const crystals = masses.reduce((sum, mass) => sum + Math.max(0, mass), 0);
  const phases = names.map(
    (phase, j): BalancePhase => ({
      phase,
      ...labelOf(input, phase, solver.x),
      ...spread(rows, width, j + 1, masses[j]),
      ofCrystals: masses[j] > 0 ? masses[j] / crystals : 0,
    }),
  );
  const residuals = oxides.map(
    (oxide, i): BalanceResidual => ({
      oxide,
      parent: problem.parent[i],
      fitted: problem.parent[i] - solver.residuals[i],
      residual: solver.residuals[i],
      sigma: hasErrors ? Math.sqrt(problem.parentVariance[i] + solver.F ** 2 * problem.daughterVariance[i]) : NaN,
    }),
  );
  const degreesOfFreedom = freedom(input, solver);
  const chiSquare = hasErrors ? solver.chiSquare : NaN;
  const probability = degreesOfFreedom > 0 && hasErrors ? 1 - jStat.chisquare.cdf(chiSquare, degreesOfFreedom) : NaN;
  const sumOfSquares = solver.residuals.reduce((sum, each) => sum + each * each, 0);
  const notes = [...input.notes];
  if (solver.F <= 0) notes.push('No liquid is left (F = 0): these phases cannot make the daughter from the parent.');
  const unused = phases.filter(({ value }) => value === 0).map(({ phase }) => phase);
  if (unused.length > 0) notes.push(`Not needed (mass 0): ${unused.join(', ')}.`);
  const because = step(
    who,
    {
      oxides: [...oxides],
      basis: options.basis ?? 'volatile-free',
      closure: options.closure ?? 'exact',
      errors: input.errorModel,
      draws: hasErrors ? draws : 0,
      seed,
      phases: input.columns.map(({ phase, chosen }) => [phase, chosen.mineral, chosen.label, chosen.source, chosen.standing]),
    },
    {
      sources: [
        'bryan_1969',
        'wright_doherty_1970',
        'bro_de_jong_1997',
        ...new Set(input.columns.filter(({ chosen }) => chosen.standing !== 'supplied').map(({ chosen }) => chosen.source)),
      ],
      tables: ['mineral-compositions.csv', 'atomic-weights.csv'],
      fromMemory: recalledMinerals(input.columns.map(({ chosen }) => chosen)),
      says: `The mass balance of ${oxides.join(', ')} was solved by non-negative weighted least squares, with intervals from ${hasErrors ? draws : 0} draws (seed ${seed}).`,
    },
  );
  const result = {
    F: spread(rows, width, 0, solver.F),
    phases,
    residuals,
    sumOfSquares,
    chiSquare,
    degreesOfFreedom,
    probability,
    correlation: correlations(rows, width),
    parent: input.parent,
    daughter: input.daughter,
    draws: rows,
    errorModel: input.errorModel,
    notes,
    lineage: [...joinLineage(input.parent.lineage, input.daughter.lineage, input.assimilant?.lineage ?? []), because],
  };
  return showAs(result, (it) => balanceView(it));
}

function balanceView(it: Omit<MassBalance, 'toMimeBundle'>) {
  const percent = (value: number): TableCell => (Number.isFinite(value) ? Number((100 * value).toFixed(2)) : null);
  const row = (name: string, label: string, of: BalanceEstimate, share: number): TableCell[] => [
    name,
    label,
    percent(of.value),
    percent(of.sigma),
    percent(of.low),
    percent(of.high),
    percent(share),
  ];
  const { daughter, parent, residuals, sumOfSquares, chiSquare, degreesOfFreedom, probability } = it;
  const fit = Number.isFinite(chiSquare)
    ? `; chi-square ${chiSquare.toPrecision(3)} for ${degreesOfFreedom} degrees of freedom (probability ${probability.toPrecision(2)})`
    : '';
  return {
    title: `${parent.samples[0]} = F · ${daughter.samples[0]} + crystals, % of the parent's mass`,
    columns: ['Part', 'Composition', 'Mass %', '1σ', '95 % from', 'to', '% of crystals'],
    rows: [
      row('liquid (daughter)', daughter.samples[0], it.F, NaN),
      ...it.phases.map((phase) => row(phase.phase, phase.label, phase, phase.value > 0 ? phase.ofCrystals : NaN)),
    ],
    notes: [
      `ΣR² ${sumOfSquares.toPrecision(3)}${fit}. Errors: ${it.errorModel}.`,
      `Residuals, parent − fit (wt %): ${residuals.map(({ oxide, residual }) => `${oxide} ${residual.toFixed(3)}`).join(', ')}.`,
      ...it.notes,
    ],
  };
}
