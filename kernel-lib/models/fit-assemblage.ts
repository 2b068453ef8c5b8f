import { findAnalyte, majorOxides, seededRandom } from '../chemistry';
import { volatileFree } from '../recast';
import { showAs, type Showable, type TableCell } from '../display';
import { derivedColumn, resolveColumn, step, Suite, suiteOf, type Traced } from '../suite';
import type { MeltType } from '../tables';
import { recalledCoefficients, recalledMinerals } from './in-words';
import { readPhaseColumns, type BalanceMinerals, type PhaseColumn } from './balance-input';
import { checkOwnCoefficients, gatherCoefficients, readMeltTypes, sourcesOf, type OwnCoefficients, type UsedCoefficient } from './coefficients';
import { descentOfAssemblage, type AssemblageProblem, type AssemblageState } from './assemblage-solver';
import { settledLabel } from './mass-balance';
import { describeCoefficients } from './path';
import { readNumber } from './trace-setup';

/** What `fitAssemblage` takes. */
export interface FitAssemblageOptions {
  /** The phases that may crystallise, each with a composition or a range. */
  readonly minerals: BalanceMinerals;
  /** Name of the sample at which F = 1 (default: the one with most MgO). */
  readonly parent?: string;
  /** Elements that take part through their D (default none: majors alone). Each needs a coefficient for every mineral. */
  readonly analytes?: readonly string[];
  readonly meltType?: MeltType | readonly MeltType[];
  readonly coefficients?: OwnCoefficients;
  /** Relative 1σ of oxides and of elements without one of their own (default 0.01 and 0.05). */
  readonly relativeError?: { readonly oxides?: number; readonly elements?: number };
  /** Relative scatter of the lavas around one line, added in quadrature (default 0.02). */
  readonly scatter?: number;
  /** Relative uncertainty of the coefficients (default 0.25): an element whose D is poorly known pulls less. */
  readonly coefficientError?: number;
  /** Bootstrap draws over the samples (default 100; 0 for none), and their seed (default 1). */
  readonly draws?: number;
  readonly seed?: number;
}

/** One phase of the assemblage. */
export interface FittedPhase {
  readonly phase: string;
  /** Its composition, or where a range settled. */
  readonly label: string;
  /** Mass fraction of the crystals (0–1), 1σ, and the 95 % interval over the bootstrap. */
  readonly share: number;
  readonly sigma: number;
  readonly low: number;
  readonly high: number;
}

/** Parent, F and assemblage fitted to all samples at once. */
export interface AssemblageFit extends Traced, Showable {
  readonly assemblage: readonly FittedPhase[];
  /** The fitted parent: one row, oxides in wt % (volatile-free), elements in ppm. */
  readonly parent: Suite;
  /** Each sample's liquid fraction and misfit (χ² over its quantities). */
  readonly samples: readonly { readonly sample: string; readonly F: number; readonly chiSquare: number; readonly count: number }[];
  /** Root mean square residual of each quantity, in σ: far above 1 is what the assemblage does not explain. */
  readonly quantities: readonly { readonly analyte: string; readonly rms: number }[];
  readonly coefficients: readonly UsedCoefficient[];
  readonly notes: readonly string[];
}

/** Values and σ of oxides (wt %) and logs of elements, sample by sample. */
function gather(
  dry: Suite,
  original: Suite,
  elements: readonly string[],
  options: FitAssemblageOptions,
  who: string,
): { values: Float64Array; sigma: Float64Array; rows: number[]; oxides: readonly string[] } {
  const relative = options.relativeError ?? {};
  const forOxides = readNumber(relative.oxides ?? 0.01, who, 'relativeError.oxides', { from: 0, to: 1, open: 'to' });
  const forElements = readNumber(relative.elements ?? 0.05, who, 'relativeError.elements', { from: 0, to: 1, open: 'to' });
  const scatter = readNumber(options.scatter ?? 0.02, who, 'scatter', { from: 0, to: 1, open: 'to' });
  const oxides = majorOxides.filter((oxide) => resolveColumn(dry, oxide) !== undefined);
  const columns = [...oxides.map((oxide) => resolveColumn(dry, oxide)!), ...elements.map((symbol) => resolveColumn(original, symbol)!)];
  const J = columns.length;
  const rows: number[] = [];
  for (let i = 0; i < dry.size; i++) if (columns.slice(0, oxides.length).filter(({ values }) => Number.isFinite(values[i])).length >= 6) rows.push(i);
  if (rows.length < 4) throw new RangeError(`${who}: ${rows.length} samples have a volatile-free analysis; the fit needs 4.`);
  const values = new Float64Array(rows.length * J).fill(NaN);
  const sigma = new Float64Array(rows.length * J).fill(NaN);
  rows.forEach((row, s) =>
    columns.forEach((column, j) => {
      const value = column.values[row];
      const own = column.sigma?.[row] ?? NaN;
      if (j < oxides.length) {
        if (!Number.isFinite(value)) return;
        values[s * J + j] = value;
        sigma[s * J + j] = Math.hypot(own > 0 ? own : Math.max(0.03, forOxides * value), scatter * value);
      } else if (value > 0) {
        values[s * J + j] = Math.log(value);
        sigma[s * J + j] = Math.hypot(own > 0 ? own / value : forElements, scatter);
      }
    }),
  );
  if (sigma.some((each) => each === 0)) throw new RangeError(`${who}: relativeError and scatter are both 0; something must be uncertain.`);
  return { values, sigma, rows, oxides };
}

function describePhases(columns: readonly PhaseColumn[], state: AssemblageState, draws: readonly Float64Array[]): FittedPhase[] {
  const names = [...new Set(columns.map(({ phase }) => phase))];
  const shareIn = (shares: ArrayLike<number>, name: string) => columns.reduce((sum, { phase }, j) => sum + (phase === name ? shares[j] : 0), 0);
  return names.map((phase) => {
    const share = shareIn(state.shares, phase);
    const drawn = Float64Array.from(draws, (shares) => shareIn(shares, phase)).sort();
    const mean = drawn.reduce((sum, each) => sum + each, 0) / drawn.length;
    const at = (p: number) => (drawn.length === 0 ? NaN : drawn[Math.round(p * (drawn.length - 1))]);
    const sigma = drawn.length < 2 ? NaN : Math.sqrt(drawn.reduce((sum, each) => sum + (each - mean) ** 2, 0) / (drawn.length - 1));
    const own = columns.flatMap((column, j) => (column.phase === phase ? [{ chosen: column.chosen, mass: state.shares[j] }] : []));
    return { phase, label: settledLabel(own), share, sigma, low: at(0.025), high: at(0.975) };
  });
}

/**
 * Fits parent, liquid fractions and crystallising assemblage to all samples of a suite at once: majors by mineral subtraction, traces (where asked
 * for) by Rayleigh's law with the coefficients of the same minerals.
 *
 * @param suite n ≥ 4 samples with majors in wt %; leave out those that `fitDescent` shows not to belong
 * @param options `minerals` by name, as in `massBalance`; `parent` the sample with F = 1; `analytes` with `meltType` (default `basalt`) and
 *   `coefficients`; `relativeError`, `scatter`, `coefficientError`; `draws`, `seed`
 * @returns shares of the phases with 95 % intervals over samples drawn again, the fitted parent, F and χ² of each sample, rms by analyte in σ
 * @throws MissingCoefficientsError; RangeError naming the bad argument
 * @source Bryan et al. 1969 (subtraction); Gast 1968 (Rayleigh); Allègre et al. 1977 (inverse treatment). One assemblage for the whole suite
 * @example fitAssemblage(suite, { minerals: { olivine: 'Fo80', clinopyroxene: 'Wo42En46Fs12', plagioclase: { between: ['An50', 'An90'] } },
 *   analytes: ['Sr', 'Zr'] }).assemblage
 */
export function fitAssemblage(suite: Suite, options: FitAssemblageOptions): AssemblageFit {
  const who = 'fitAssemblage';
  if (!(suite instanceof Suite)) throw new TypeError(`${who}: the first argument must be a suite.`);
  const columns = readPhaseColumns(options?.minerals, who);
  const elements = options.analytes ?? [];
  for (const symbol of elements) {
    if (findAnalyte(symbol)?.kind !== 'element') throw new RangeError(`${who}: analytes holds "${String(symbol)}", which is not an element symbol.`);
    if (resolveColumn(suite, symbol) === undefined) throw new RangeError(`${who}: the suite holds no ${symbol}.`);
  }
  const coefficientError = readNumber(options.coefficientError ?? 0.25, who, 'coefficientError', { from: 0, to: 2 });
  const draws = readNumber(options.draws ?? 100, who, 'draws', { from: 0, to: 1e5 });
  checkOwnCoefficients(options.coefficients ?? {}, who);
  const minerals = [...new Set(columns.map(({ chosen }) => chosen.mineral))];
  const { used } = gatherCoefficients({
    minerals,
    analytes: elements,
    sets: readMeltTypes(options.meltType ?? 'basalt', who),
    own: options.coefficients ?? {},
    who,
  });
  const dry = volatileFree(suite);
  const { values, sigma, rows, oxides } = gather(dry, suite, elements, options, who);
  const k = columns.length;
  const phases = new Float64Array(k * oxides.length);
  columns.forEach(({ chosen }, j) => oxides.forEach((oxide, i) => (phases[j * oxides.length + i] = chosen.oxides.get(oxide) ?? 0)));
  const K = new Float64Array(k * elements.length);
  columns.forEach(({ chosen }, j) => elements.forEach((_, e) => (K[j * elements.length + e] = used[minerals.indexOf(chosen.mineral)][e].value)));
  const names = rows.map((row) => suite.samples[row]);
  const MgO = oxides.indexOf('MgO');
  const J = oxides.length + elements.length;
  const parentAt =
    options.parent === undefined
      ? names.reduce((best, _, s) => (values[s * J + MgO] > values[best * J + MgO] ? s : best), 0)
      : names.indexOf(options.parent);
  if (parentAt < 0) throw new RangeError(`${who}: parent is "${options.parent}", which is not among the samples with a volatile-free analysis.`);
  const problem: AssemblageProblem = {
    samples: rows.length,
    oxides: oxides.length,
    elements: elements.length,
    phases: k,
    values,
    sigma,
    compositions: phases,
    coefficients: K,
    coefficientError,
    parentAt,
    weights: new Float64Array(rows.length).fill(1),
  };
  const state = descentOfAssemblage(problem, undefined, 200);
  const random = seededRandom(options.seed ?? 1, who);
  const drawn: Float64Array[] = [];
  for (let d = 0; d < draws; d++) {
    const weights = new Float64Array(rows.length);
    for (let s = 0; s < rows.length; s++) weights[Math.floor(random.uniform() * rows.length)]++;
    drawn.push(descentOfAssemblage({ ...problem, weights }, state, 20).shares);
  }
  const because = step(
    who,
    {
      samples: rows.length,
      oxides: [...oxides],
      elements: [...elements],
      parent: names[parentAt],
      coefficientError,
      scatter: options.scatter ?? 0.02,
      draws,
      seed: options.seed ?? 1,
      phases: columns.map(({ phase, chosen }) => [phase, chosen.label, chosen.source, chosen.standing]),
    },
    {
      sources: ['bryan_1969', 'gast_1968', 'allegre_1977', ...sourcesOf(used.flat())],
      tables: ['mineral-compositions.csv', 'atomic-weights.csv', ...(elements.length > 0 ? ['partition-coefficients.csv'] : [])],
      fromMemory: [...recalledMinerals(columns.map(({ chosen }) => chosen)), ...recalledCoefficients(used.flat())],
      says: `Parent, liquid fractions and assemblage were fitted to ${rows.length} samples at once (${draws} draws, seed ${options.seed ?? 1}).`,
    },
  );
  const lineage = [...suite.lineage, because];
  const parent = suiteOf({
    columns: [
      ...oxides.map((oxide, i) => derivedColumn(oxide, Float64Array.of(state.parent[i]), 'wt%', undefined, 'oxide')),
      ...elements.map((symbol, e) => derivedColumn(symbol, Float64Array.of(Math.exp(state.parent[oxides.length + e])), 'ppm', undefined, 'element')),
    ],
    labels: { sample: ['fitted parent'] },
    lineage,
  });
  const result = {
    assemblage: describePhases(columns, state, drawn),
    parent,
    samples: names.map((sample, s) => ({ sample, F: state.F[s], chiSquare: state.misfits[s], count: state.counts[s] })),
    quantities: [...oxides, ...elements].map((analyte, j) => ({ analyte, rms: state.rms[j] })),
    coefficients: used.flat(),
    notes: rows.length < suite.size ? [`${suite.size - rows.length} samples without a volatile-free analysis were left out.`] : [],
    lineage,
  };
  return showAs(result, (it) => ({
    title: `Assemblage of ${it.samples.length} samples at once, from ${names[parentAt]}`,
    columns: ['Phase', 'Composition', '% of crystals', '1σ', '95 % from', 'to'],
    rows: it.assemblage.map((each): TableCell[] => [each.phase, each.label, 100 * each.share, 100 * each.sigma, 100 * each.low, 100 * each.high]),
    notes: [
      `F: ${it.samples.map(({ sample, F }) => `${sample} ${F.toFixed(2)}`).join(', ')}.`,
      `Root mean square residual in σ: ${it.quantities.map(({ analyte, rms }) => `${analyte} ${rms.toFixed(1)}`).join(', ')}.`,
      ...it.notes,
      ...describeCoefficients(it.coefficients),
    ],
  }));
}
