import { formatNumber, showAs, type Showable, type TableCell } from '../display';
import { cellState, derivedColumn, resolveColumn, step, type Column, type Step, type StepDetail, type Suite } from '../suite';
import { molarMass } from '../tables';
import { splitIron, type IronSplitOptions } from './iron-split';
import { normMinerals, normParts, normRow, type NormMineral, type NormPart } from './norm-rules';

/** How `norm` works. */
export interface NormOptions {
  /** How iron is split (default: as measured, else Le Maitre 1976). A suite that holds FeO and Fe2O3 for every row is not changed by that. */
  readonly iron?: IronSplitOptions;
  /** `volatile-free` (default): minerals in % of a sum of 100 without H2O; `as-given`: minerals sum to the oxides as analysed. */
  readonly sum?: 'volatile-free' | 'as-given';
  /** Carbon dioxide made into calcite (default false: the rock's CO2 is taken as secondary). */
  readonly carbonate?: boolean;
  /** Cr2O3 made into chromite, NiO joined to FeO, SrO and BaO to CaO, where the suite has them (default false). */
  readonly traces?: boolean;
  /** Molar masses (g/mol) by oxide, to repeat a published norm that used others than IUPAC 2021. */
  readonly molarMasses?: Readonly<Record<string, number>>;
}

/** CIPW norms of a suite of n samples. */
export interface Norm extends Showable {
  readonly suite: Suite;
  /** Weight per cent by mineral (n each; 0 where it is absent, NaN where the sample has no norm). */
  readonly weights: Readonly<Record<NormMineral, Column>>;
  /** Moles in oxide formula units per 100 g (`Or` = K2O·Al2O3·6SiO2), n each. */
  readonly moles: Readonly<Record<NormMineral, Column>>;
  /** Weight per cent of the end members of diopside, hypersthene and olivine, n each. */
  readonly parts: Readonly<Record<NormPart, Column>>;
  /** Molar Mg/(Mg + Fe) of the mafic silicates (n). */
  readonly magnesiumShare: Float64Array;
  /** Sum of the oxides that the norm was made of, wt % (n). */
  readonly oxideSum: Float64Array;
  /** P2O5, CO2 and Cr2O3 that found no lime or iron, wt % (n): oxides less minerals. 0 for ordinary rocks. */
  readonly remainder: Float64Array;
  /** Why a sample has no norm (n); '' where it has one. */
  readonly reasons: readonly string[];
  readonly lineage: readonly Step[];
}

/** Oxides without which there is no norm; the others count as 0 where they are missing. */
const needed = ['SiO2', 'Al2O3', 'FeO', 'Fe2O3', 'MgO', 'CaO', 'Na2O', 'K2O'] as const;
const optional = ['TiO2', 'MnO', 'P2O5'] as const;
const traces = ['Cr2O3', 'NiO', 'SrO', 'BaO'] as const;

/**
 * CIPW norm of every sample.
 *
 * Rules of Cross, Iddings, Pirsson & Washington (1902) as in Johannsen (1931): MnO counts as FeO; apatite takes 10/3 CaO to one P2O5; iron
 * and titanium make ilmenite, what titanium is left makes titanite, then rutile; ferric iron makes acmite in peralkaline rocks, then
 * magnetite, then haematite; a lack of silica turns, in this order, hypersthene to olivine, titanite to perovskite, albite to nepheline,
 * orthoclase to leucite, wollastonite and diopside to larnite and olivine, leucite to kaliophilite. The minerals sum to the oxides.
 *
 * @param suite n samples, oxides in wt %
 * @param options see `NormOptions`
 * @returns weights, moles and end members, n each. A sample without SiO2, Al2O3, iron, MgO, CaO, Na2O or K2O, or with less silica than
 *   the most silica-poor minerals take, has no norm, and `reasons` says so. Below-detection oxides count as 0, as missing TiO2, MnO, P2O5 do
 * @throws RangeError for an unknown option
 * @source Cross et al. 1902; Johannsen 1931; Cox, Bell & Pankhurst 1979
 * @example norm(suite, { iron: { method: 'fixed', ratio: 0.15 } }).weights.Q.values
 */
export function norm(suite: Suite, options: NormOptions = {}): Norm {
  const { iron = {}, sum = 'volatile-free', carbonate = false, traces: withTraces = false, molarMasses = {} } = options;
  if (sum !== 'volatile-free' && sum !== 'as-given') throw new RangeError(`norm: sum must be "volatile-free" or "as-given", not "${String(sum)}".`);
  for (const [oxide, mass] of Object.entries(molarMasses)) {
    if (!(mass > 0 && Number.isFinite(mass)))
      throw new RangeError(`norm: the molar mass of ${oxide} must be a positive number, not ${String(mass)}.`);
  }
  const split = splitIron(suite, iron);
  const used: readonly string[] = [...needed, ...optional, ...(carbonate ? ['CO2'] : []), ...(withTraces ? traces : [])];
  const columns = new Map(used.map((oxide) => [oxide, resolveColumn(split, oxide)]));
  const mass = (oxide: string) => (Object.hasOwn(molarMasses, oxide) ? molarMasses[oxide] : molarMass(oxide));
  const size = suite.size;
  const blank = (names: readonly string[]) => names.map(() => new Float64Array(size));
  const weights = blank(normMinerals);
  const moles = blank(normMinerals);
  const parts = blank(normParts);
  const magnesiumShare = new Float64Array(size);
  const oxideSum = new Float64Array(size);
  const remainder = new Float64Array(size);
  const reasons = new Array<string>(size).fill('');
  const row = normRow(mass, { carbonate, traces: withTraces });
  const values = used.map((oxide) => columns.get(oxide)?.values);
  const states = used.map((oxide) => columns.get(oxide)?.states);
  const gaps = new Map<number, string>();
  let incomplete = 0;
  for (let i = 0; i < size; i++) {
    let lacking = 0;
    let given = 0;
    let gap = 0;
    for (let j = 0; j < used.length; j++) {
      const value = values[j]?.[i] ?? NaN;
      if (Number.isFinite(value)) {
        row.oxides[j] = value;
        given += value;
        continue;
      }
      row.oxides[j] = 0;
      const below = states[j]?.[i] === cellState.belowDetection;
      if (j < needed.length && !below) lacking |= 1 << j;
      else if (!below && j < needed.length + optional.length) gap = 1;
    }
    oxideSum[i] = given;
    const trouble = lacking !== 0 ? lacking : row.run() ? 0 : -1;
    if (trouble !== 0) {
      let text = gaps.get(trouble);
      if (text === undefined) {
        text =
          trouble === -1
            ? 'less silica than the norm can use'
            : `needs ${[...new Set(needed.filter((_, j) => (trouble & (1 << j)) !== 0).map((oxide) => (oxide.startsWith('Fe') ? 'iron' : oxide)))].join(', ')}`;
        gaps.set(trouble, text);
      }
      reasons[i] = text;
      for (const columns of [weights, moles, parts]) clear(i, columns);
      magnesiumShare[i] = NaN;
      remainder[i] = NaN;
      continue;
    }
    incomplete += gap;
    const scale = sum === 'volatile-free' ? 100 / given : 1;
    remainder[i] = row.remainder() * scale;
    write(i, row.weights, scale, weights);
    write(i, row.moles, scale, moles);
    write(i, row.parts, scale, parts);
    magnesiumShare[i] = row.magnesiumShare();
  }
  const asColumns = <Name extends string>(names: readonly Name[], from: readonly Float64Array[], unit: string, label: string) =>
    Object.fromEntries(names.map((name, j) => [name, derivedColumn(`${label} ${name}`, from[j], unit)])) as Record<Name, Column>;
  const without = reasons.reduce((count, reason) => count + (reason === '' ? 0 : 1), 0);
  const because = step(
    'norm',
    {
      sum,
      carbonate,
      traces: withTraces,
      molarMasses: molarMasses as StepDetail,
      rows: size,
      withoutNorm: without,
      countedMissingAsZero: incomplete,
    },
    {
      sources: ['cross_1902', 'johannsen_1931', 'cox_bell_pankhurst_1979'],
      tables: ['atomic-weights.csv'],
      says: `CIPW norms were computed${sum === 'volatile-free' ? ' on a volatile-free basis' : ''}${carbonate ? ', CO2 made into calcite' : ''}.`,
    },
  );
  const result = {
    suite,
    weights: asColumns(normMinerals, weights, 'wt%', 'norm'),
    moles: asColumns(normMinerals, moles, 'mol', 'norm moles'),
    parts: asColumns(normParts, parts, 'wt%', 'norm'),
    magnesiumShare,
    oxideSum,
    remainder,
    reasons,
    lineage: [...split.lineage, because],
  };
  return showAs(result, normTable);
}

/** Copies the numbers of one row into place j of every column. */
function write(i: number, from: Float64Array, scale: number, to: readonly Float64Array[]): void {
  for (let j = 0; j < to.length; j++) to[j][i] = from[j] * scale;
}

function clear(i: number, to: readonly Float64Array[]): void {
  for (let j = 0; j < to.length; j++) to[j][i] = NaN;
}

const rowsShown = 60;

function normTable({ suite, weights, reasons, lineage }: Omit<Norm, 'toMimeBundle'>) {
  const present = normMinerals.filter((mineral) => weights[mineral].values.some((value) => value > 0));
  const rows = Array.from({ length: Math.min(rowsShown, suite.size) }, (_, i): TableCell[] => [
    suite.samples[i],
    ...present.map((mineral) => {
      const value = weights[mineral].values[i];
      return value > 0 ? formatNumber(Number(value.toFixed(2))) : null;
    }),
    reasons[i],
  ]);
  return {
    title: 'CIPW norm (wt %)',
    columns: ['sample', ...present, 'remark'],
    rows,
    totalRows: suite.size,
    notes: lineage.slice(-2).map(({ says }) => says),
  };
}
