import { showAs, type Showable, type TableCell, type TableView } from '../display';
import { derivedColumn, resolveColumn, step, type Column, type Step, type Suite } from '../suite';
import { publishedConstant, reservoir, type Reservoir } from '../tables';
import { checkCall } from './check-call';
import { decayConstant, decaySystems, usualDecayConstants, type DecaySystem } from './decay-systems';
import type { NotDetermined } from './ratios';

/** How isotope ratios are worked up. */
export interface IsotopeOptions {
  /** Age in Ma: a number for all samples, or the name of a column in Ma (default 0: ratios as measured). */
  readonly age?: number | string;
  /** Chondritic uniform reservoir of each ε (defaults: Nd `chur-1980`, the renormalised 0.512638; Hf `chur-2008`). */
  readonly chur?: { readonly neodymium?: string; readonly hafnium?: string };
  /** Decay constants by daughter ratio, as keys of reference-tables/constants.csv, e.g. `{ '87Sr/86Sr': 'lambda-87Rb-v15' }`. */
  readonly decay?: Readonly<Record<string, string>>;
}

/** Isotope results of every sample. */
export interface IsotopeTable extends Showable {
  readonly samples: readonly string[];
  /**
   * `87Sr/86Sr(i)`, `143Nd/144Nd(i)`, `176Hf/177Hf(i)` at the age; `epsilon-Nd`, `epsilon-Hf` at the age; `delta-7/4`, `delta-8/4` as measured.
   * n values each, with 1σ where the ratios have it.
   */
  readonly columns: ReadonlyMap<string, Column>;
  readonly notDetermined: readonly NotDetermined[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

const defaultChur = { neodymium: 'chur-1980', hafnium: 'chur-2008' } as const;

/**
 * Initial ratios, εNd and εHf at an age, and the distance of Pb from the Northern Hemisphere Reference Line (Δ7/4, Δ8/4).
 *
 * R(t) = R − P·(e^(λt) − 1), with the parent ratio P as measured (`147Sm/144Nd`) or from the element concentrations;
 * ε = 10⁴·[R(t)/CHUR(t) − 1]; Δ7/4 = 100·(207Pb/204Pb − line), Δ8/4 = 100·(208Pb/204Pb − line).
 *
 * @param suite n samples with isotope ratios (and, for an age above 0, parent ratios or Rb, Sr, Sm, Nd, Lu, Hf in ppm)
 * @param options `age` (Ma), `chur`, `decay`
 * @returns columns of n cells; what cannot be had is in `notDetermined`. εs in parts per 10⁴, Δs in hundredths of the ratio
 * @throws RangeError for a bad age, an unknown reservoir or constant
 * @source DePaolo & Wasserburg 1976 (ε); Hart 1984 (reference line); constants by their own source
 * @example isotopes(suite).columns.get('epsilon-Nd').values
 */
export function isotopes(suite: Suite, options: IsotopeOptions = {}): IsotopeTable {
  checkCall('isotopes', suite, options);
  const { age = 0, chur = {}, decay = {} } = options;
  for (const key of Object.keys(decay)) {
    if (!decaySystems().has(key)) throw new RangeError(`isotopes: decay names "${key}"; it knows ${[...decaySystems().keys()].join(', ')}.`);
  }
  const ages = agesOf(suite, age);
  const columns = new Map<string, Column>();
  const notDetermined: NotDetermined[] = [];
  const sources = new Set<string>();
  const notes: string[] = [];
  const used: Record<string, string> = {};
  const cannot = (name: string, because: string) => notDetermined.push({ name, because });
  for (const [ratio, system] of decaySystems()) {
    const constant = decayConstant(decay[ratio] ?? usualDecayConstants[ratio]);
    const measured = resolveColumn(suite, ratio);
    const name = `${ratio}(i)`;
    const epsilon = ratio === '143Nd/144Nd' ? 'epsilon-Nd' : ratio === '176Hf/177Hf' ? 'epsilon-Hf' : undefined;
    const lacks =
      measured === undefined
        ? `needs ${ratio}`
        : ages.isZero || parentRatio(suite, system, measured) !== undefined
          ? undefined
          : `needs ${system.parentRatio}, or ${system.parent} and ${system.daughter}`;
    if (lacks !== undefined) {
      for (const each of epsilon === undefined ? [name] : [name, epsilon]) cannot(each, lacks);
      continue;
    }
    const initial = atAge(name, measured!, ages.isZero ? undefined : parentRatio(suite, system, measured!), ages.values, constant.value);
    columns.set(name, initial);
    if (!ages.isZero) {
      used[ratio] = constant.constant;
      if (constant.source !== '') sources.add(constant.source);
    }
    if (epsilon === undefined) continue;
    sources.add('depaolo_wasserburg_1976');
    const which = reservoir(
      (epsilon === 'epsilon-Nd' ? chur.neodymium : chur.hafnium) ?? (epsilon === 'epsilon-Nd' ? defaultChur.neodymium : defaultChur.hafnium),
    );
    const of = churValues(which, system);
    used[epsilon] = which.key;
    of.sources.forEach((source) => sources.add(source));
    notes.push(`${epsilon}: ${which.name}, ${ratio} ${of.ratio}, ${system.parentRatio} ${of.parent}.`);
    columns.set(epsilon, epsilonColumn(epsilon, initial, of, ages.values, constant.value));
  }
  for (const [delta, ratio, line] of [
    ['delta-7/4', '207Pb/204Pb', '207'],
    ['delta-8/4', '208Pb/204Pb', '208'],
  ] as const) {
    const [lead, base] = [resolveColumn(suite, ratio), resolveColumn(suite, '206Pb/204Pb')];
    if (lead === undefined || base === undefined) {
      cannot(delta, `needs ${lead === undefined ? ratio : '206Pb/204Pb'}`);
      continue;
    }
    const [slope, intercept] = [publishedConstant(`nhrl-${line}-slope`), publishedConstant(`nhrl-${line}-intercept`)];
    if (slope.source !== '') sources.add(slope.source);
    columns.set(delta, deltaColumn(delta, lead, base, slope.value, intercept.value));
  }
  if (!ages.isZero) notes.push('Pb ratios are not corrected for age.');
  notes.push(...notDetermined.map(({ name, because }) => `${name} not determined: ${because}.`));
  const detail = { age, used, notDetermined: notDetermined.map(({ name }) => name) };
  const lineage = [
    ...suite.lineage,
    step('isotopes', detail, { sources: [...sources], tables: ['reservoirs.csv', 'constants.csv', 'parent-daughter-factors.csv'] }),
  ];
  return showAs({ samples: suite.samples, columns, notDetermined, notes, lineage }, isotopeView);
}

/**
 * The suite with isotope results added as columns (`epsilon-Nd`, `87Sr/86Sr(i)`, `delta-7/4` …).
 *
 * @example withIsotopes(suite, { age: 12 }).values('epsilon-Nd')
 */
export function withIsotopes(suite: Suite, options: IsotopeOptions = {}): Suite {
  const { columns, lineage } = isotopes(suite, options);
  return suite.with(columns.values(), lineage[lineage.length - 1]);
}

function agesOf(suite: Suite, age: number | string): { readonly values: Float64Array; readonly isZero: boolean } {
  if (typeof age === 'string') return { values: suite.column(age).values, isZero: false };
  if (!(Number.isFinite(age) && age >= 0 && age <= 4568))
    throw new RangeError(`isotopes: age is ${String(age)}; give Ma from 0 to 4568, or the name of a column in Ma.`);
  return { values: new Float64Array(suite.size).fill(age), isZero: age === 0 };
}

function parentRatio(
  suite: Suite,
  { parentRatio: measured, parent, daughter, intercept, slope }: DecaySystem,
  daughterRatio: Column,
): Float64Array | undefined {
  const own = suite.columns.get(measured);
  const [p, d] = [resolveColumn(suite, parent), resolveColumn(suite, daughter)];
  if (own === undefined && (p === undefined || d === undefined)) return undefined;
  const values = own === undefined ? new Float64Array(suite.size).fill(NaN) : own.values.slice();
  if (p !== undefined && d !== undefined) {
    for (let i = 0; i < values.length; i++)
      if (Number.isNaN(values[i])) values[i] = (p.values[i] / d.values[i]) * (intercept + slope * daughterRatio.values[i]);
  }
  return values;
}

const years = 1e6;

/** R(t); the error is that of the measured ratio, since the age correction of young lavas adds far less. */
function atAge(name: string, measured: Column, parent: Float64Array | undefined, ages: Float64Array, lambda: number): Column {
  const values = measured.values.slice();
  if (parent !== undefined) for (let i = 0; i < values.length; i++) values[i] -= parent[i] * Math.expm1(lambda * ages[i] * years);
  return derivedColumn(name, values, '', measured.sigma?.slice(), 'isotope-ratio');
}

function churValues(which: Reservoir, { daughterRatio, parentRatio }: DecaySystem): { ratio: number; parent: number; sources: string[] } {
  const [ratio, parent] = [which.values.get(daughterRatio), which.values.get(parentRatio)];
  if (ratio === undefined || parent === undefined)
    throw new RangeError(`isotopes: ${which.name} has no ${ratio === undefined ? daughterRatio : parentRatio}; choose another reservoir.`);
  return { ratio: ratio.value, parent: parent.value, sources: [ratio.source, parent.source] };
}

function epsilonColumn(symbol: string, initial: Column, chur: { ratio: number; parent: number }, ages: Float64Array, lambda: number): Column {
  const values = new Float64Array(ages.length);
  const sigma = initial.sigma === undefined ? undefined : new Float64Array(ages.length);
  for (let i = 0; i < values.length; i++) {
    const then = chur.ratio - chur.parent * Math.expm1(lambda * ages[i] * years);
    values[i] = 1e4 * (initial.values[i] / then - 1);
    if (sigma !== undefined) sigma[i] = (1e4 * initial.sigma![i]) / then;
  }
  return derivedColumn(symbol, values, '', sigma);
}

function deltaColumn(symbol: string, lead: Column, base: Column, slope: number, intercept: number): Column {
  const values = lead.values.map((value, i) => 100 * (value - (slope * base.values[i] + intercept)));
  const sigma =
    lead.sigma === undefined || base.sigma === undefined ? undefined : lead.sigma.map((own, i) => 100 * Math.hypot(own, slope * base.sigma![i]));
  return derivedColumn(symbol, values, '', sigma);
}

function isotopeView(table: Omit<IsotopeTable, keyof Showable>): TableView {
  const columns = [...table.columns.values()];
  const shown = Math.min(table.samples.length, 60);
  const text = (entry: Column, i: number): TableCell =>
    Number.isNaN(entry.values[i]) ? null : Number(entry.values[i].toFixed(entry.kind === 'isotope-ratio' ? 6 : 2));
  const rows = Array.from({ length: shown }, (_, i): TableCell[] => [table.samples[i], ...columns.map((entry) => text(entry, i))]);
  return {
    title: `Isotopes of ${table.samples.length} samples`,
    columns: ['sample', ...columns.map(({ symbol }) => symbol)],
    rows,
    totalRows: table.samples.length,
    notes: table.notes,
  };
}
