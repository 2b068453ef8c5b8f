import { showAs, type Showable, type TableCell } from '../display';
import { norm, type IronSplitOptions, type Norm } from '../recast';
import { gatherColumn, joinLineages, step, suiteOf, type Column, type Step, type Suite } from '../suite';
import { molarMass } from '../tables';
import { findScheme } from './catalogue';
import { isVolatileFree, operandsOf, type IronBasis, type Operands } from './axes';
import { classifyOptions, judge } from './classify';
import { namingRules } from './naming-rules';
import type { SchemeVerdict } from './verdicts';

/** How `nameRocks` works. */
export interface NameOptions {
  /** Iron in the volatile-free sum (default `measured`). */
  readonly iron?: IronBasis;
  /** Iron in the norm (default: as measured, else Le Maitre 1976). */
  readonly normIron?: IronSplitOptions;
  /** What a failed volatile screen does: `flag` (default) names the rock with a remark, `withhold` gives no name. */
  readonly volatiles?: 'flag' | 'withhold';
}

/** Names by the IUGS rules, and the numbers they rest on (n each). */
export interface RockNames extends Showable {
  readonly suite: Suite;
  /** Full name, e.g. `medium-K andesite`; '' where there is none. */
  readonly names: readonly string[];
  /** Name without the potassium prefix, e.g. `andesite`, `hawaiite`, `boninite`. */
  readonly roots: readonly string[];
  /** TAS field symbol; '' where there is none. */
  readonly fields: readonly string[];
  /** Why there is no name, or what to mind about it. */
  readonly remarks: readonly string[];
  readonly tas: SchemeVerdict;
  readonly potassium: SchemeVerdict;
  /** Norms of the samples whose name rests on one (basalt, tephrite, foidite and trachyte fields). */
  readonly norm: Norm;
  /** Row of `norm` that belongs to a sample (n); −1 where its name rests on none. */
  readonly normRow: Int32Array;
  /** 0 not asked or not met, 1 boninite, 2 komatiite, 3 meimechite, 4 picrite. */
  readonly highMagnesium: Uint8Array;
  /** Volatile screen: 0 passed, 1 failed, 2 not measured. */
  readonly volatileScreen: Uint8Array;
  readonly lineage: readonly Step[];
}

const highMagnesiumNames = ['', 'boninite', 'komatiite', 'meimechite', 'picrite'];

/**
 * Names volcanic rocks by the IUGS rules, whole: the volatile screen; high-magnesium rocks first (boninite, komatiite, meimechite,
 * picrite); then the TAS field and its rules: sodic or potassic name of S1–S3, basanite or tephrite by normative olivine, nephelinite,
 * trachyte or trachydacite by normative quartz, alkali or subalkali basalt by normative nepheline, peralkaline trachytes and rhyolites, and
 * the low-, medium- or high-K prefix of subalkaline rocks. `namingChain` gives the rules that led to a name.
 *
 * For volcanic rocks whose mode is not known. Pyroclastic, carbonatitic, melilite-, kalsilite- and leucite-bearing rocks, kimberlites,
 * lamproites and lamprophyres have rules of their own and must be taken out first: chemistry alone does not show them.
 *
 * @param suite n samples with major oxides in wt %, as analysed or volatile-free; `H2O+` and `CO2` are screened where present
 * @param options `iron`, `normIron`, `volatiles`
 * @returns names (n) with what they rest on
 * @throws RangeError for an unknown option
 * @source Le Maitre et al. 2002; Le Bas et al. 1986; Le Bas 2000
 * @example nameRocks(suite).names
 */
export function nameRocks(suite: Suite, options: NameOptions = {}): RockNames {
  const { normIron = {}, volatiles = 'flag' } = options;
  const { iron } = classifyOptions({ iron: options.iron }, 'nameRocks');
  if (volatiles !== 'flag' && volatiles !== 'withhold')
    throw new RangeError(`nameRocks: volatiles must be "flag" or "withhold", not "${String(volatiles)}".`);
  return nameWith(operandsOf(suite, iron), normIron, volatiles);
}

/** @internal The same on operands made before, so that several questions share one recast. */
export function nameWith(operands: Operands, normIron: IronSplitOptions, volatiles: 'flag' | 'withhold'): RockNames {
  const { suite } = operands;
  const { size } = suite;
  const tas = judge(operands, findScheme('tas'));
  const potassium = judge(operands, findScheme('potassium-silica'));
  const highMagnesium = screenMagnesium(operands);
  const asked = Int32Array.from({ length: size }, (_, i) => i).filter((i) => highMagnesium[i] === 0 && fieldsByNorm.has(tas.symbols[i]));
  const fieldOf = normIron.fields ?? tas.symbols;
  const made = norm(majorsOf(suite, asked, normIron), { iron: { ...normIron, fields: Array.from(asked, (i) => fieldOf[i]) } });
  const normRow = new Int32Array(size).fill(-1);
  asked.forEach((i, row) => (normRow[i] = row));
  const volatileScreen = screenVolatiles(suite);
  const values = namingValues(operands, made, normRow);
  const names = new Array<string>(size).fill('');
  const roots = new Array<string>(size).fill('');
  const remarks = new Array<string>(size).fill('');
  let screened = 0;
  let named = 0;
  const joined = new Map<string, Map<string, string>>();
  for (let i = 0; i < size; i++) {
    const high = highMagnesium[i];
    const failed = volatileScreen[i] === 1 && high === 0;
    if (failed) screened++;
    if (failed && volatiles === 'withhold') {
      remarks[i] = volatileRemark;
      continue;
    }
    if (high > 0) {
      roots[i] = names[i] = highMagnesiumNames[high];
      if (high > 1) remarks[i] = cumulateRemark;
    } else if (tas.field[i] < 0) remarks[i] = tas.remarks[i];
    else {
      const symbol = tas.symbols[i];
      const root = rootName(symbol, tas.names[i], values, i);
      roots[i] = root.name;
      const prefixed = root.prefix && potassium.field[i] >= 0;
      names[i] = prefixed ? join(joined, potassium.names[i], root.name) : root.name;
      remarks[i] = root.remark;
      if (prefixed && potassium.remarks[i] !== '') remarks[i] = remarks[i] === '' ? potassium.remarks[i] : `${remarks[i]}; ${potassium.remarks[i]}`;
    }
    if (names[i] !== '') named++;
    if (failed) remarks[i] = remarks[i] === '' ? volatileRemark : `${volatileRemark}; ${remarks[i]}`;
  }
  const because = step(
    'nameRocks',
    { iron: isVolatileFree(suite) ? 'as recast before' : operands.iron, volatiles, rows: size, named, failedVolatileScreen: screened },
    {
      sources: ['le_maitre_2002', 'le_bas_1986', 'le_bas_2000'],
      tables: ['naming-rules.json', 'schemes/tas.json', 'schemes/potassium-silica.json'],
      fromMemory: Object.values(namingRules()).flatMap((rule) => (typeof rule === 'object' && rule.standing === 'from memory' ? [rule.text] : [])),
      says: 'Rocks were named by the IUGS rules (Le Maitre et al. 2002).',
    },
  );
  const lineage = [...joinLineages(operands.onBasis('volatile-free').lineage, made.lineage), because];
  return showAs(
    { suite, names, roots, fields: tas.symbols, remarks, tas, potassium, norm: made, highMagnesium, volatileScreen, normRow, lineage },
    nameTable,
  );
}

const cumulateRemark = 'if it is a lava: peridotites and rocks with accumulated olivine meet this rule too';
const volatileRemark = 'fails the volatile screen (H2O+ > 2 % or CO2 > 0.5 %): not fit for naming';

/** Prefix and root as one text, made once. */
function join(known: Map<string, Map<string, string>>, prefix: string, root: string): string {
  let roots = known.get(prefix);
  if (roots === undefined) known.set(prefix, (roots = new Map()));
  let text = roots.get(root);
  if (text === undefined) roots.set(root, (text = `${prefix} ${root}`));
  return text;
}

/** TAS fields whose names rest on the norm. */
const fieldsByNorm = new Set(['B', 'U1', 'F', 'T']);

/** What the norm of some rows reads: their oxides, and the columns that the split of iron is told to read. */
function majorsOf(suite: Suite, rows: Int32Array, { temperature, pressure }: IronSplitOptions): Suite {
  const more = new Set<unknown>(['Ti', 'K', 'Mn', 'P', temperature, pressure]);
  const oxides = [...suite.columns.values()].filter(({ kind, symbol }) => kind === 'oxide' || more.has(symbol));
  return suiteOf({
    columns: oxides.map((each) => gatherColumn(each, rows)),
    labels: { sample: Array.from(rows, (i) => suite.samples[i]) },
    lineage: suite.lineage,
  });
}

/** Columns that the TAS rules read, volatile-free, and the norm. */
export interface NamingValues {
  readonly soda?: Float64Array;
  readonly potash?: Float64Array;
  readonly alumina?: Float64Array;
  readonly iron?: Float64Array;
  readonly norm: Norm;
  readonly normRow: Int32Array;
}

/** @internal */
export function namingValues(operands: Operands, made: Norm, normRow: Int32Array): NamingValues {
  const on = (symbol: string) => operands.operand('volatile-free', symbol)?.values;
  return { soda: on('Na2O'), potash: on('K2O'), alumina: on('Al2O3'), iron: on('FeOT'), norm: made, normRow };
}

/** (Na2O + K2O)/Al2O3, molar. */
export function agpaitic({ soda, potash, alumina }: NamingValues, i: number): number {
  return (soda![i] / molarMass('Na2O') + potash![i] / molarMass('K2O')) / (alumina![i] / molarMass('Al2O3'));
}

/** 100 Q/(Q + or + ab + an) of the norm. */
export function quartzShare({ norm: { weights }, normRow }: NamingValues, i: number): number {
  const row = normRow[i];
  const q = weights.Q.values[row];
  return (100 * q) / (q + weights.Or.values[row] + weights.Ab.values[row] + weights.An.values[row]);
}

/** The name inside a TAS field, by the field's own rule. */
function rootName(symbol: string, fieldName: string, values: NamingValues, i: number): { name: string; prefix: boolean; remark: string } {
  const rules = namingRules();
  const {
    norm: { weights, reasons },
    normRow,
  } = values;
  const row = normRow[i];
  const plain = { name: fieldName, prefix: false, remark: '' };
  const noNorm = row >= 0 && reasons[row] !== '';
  switch (symbol) {
    case 'S1':
    case 'S2':
    case 'S3': {
      const sodic = values.soda![i] - rules.sodic.offset >= values.potash![i];
      return { ...plain, name: rules.sodic.names[symbol][sodic ? 0 : 1] };
    }
    case 'B':
      if (noNorm) return { name: 'basalt', prefix: false, remark: `alkali or subalkali not determined: ${reasons[row]}` };
      return weights.Ne.values[row] > 0 ? { ...plain, name: 'alkali basalt' } : { ...plain, name: 'subalkali basalt', prefix: true };
    case 'U1':
    case 'F': {
      if (noNorm) return { ...plain, remark: `the norm that the name rests on is not determined: ${reasons[row]}` };
      if (weights.Ne.values[row] > rules.nephelinite.nephelineAbove) return { ...plain, name: 'nephelinite' };
      if (weights.Ne.values[row] > 0 && weights.Ab.values[row] < rules.nephelinite.albiteBelow) return { ...plain, name: 'melanephelinite' };
      if (symbol === 'F') return { ...plain, remark: 'a foidite is named by its most abundant feldspathoid: see the thin section' };
      return { ...plain, name: weights.Ol.values[row] > rules.basanite.olivineAbove ? 'basanite' : 'tephrite' };
    }
    case 'T': {
      if (noNorm) return { ...plain, remark: `trachyte or trachydacite not determined: ${reasons[row]}` };
      const name = quartzShare(values, i) > rules.trachyte.quartzAbove ? 'trachydacite' : 'trachyte';
      if (!(agpaitic(values, i) > rules.peralkaline.above)) return { ...plain, name };
      if (name === 'trachydacite') return { ...plain, name, remark: 'peralkaline; the rule has names for trachytes and rhyolites only' };
      return { ...plain, name: `${comenditic(values, i) ? 'comenditic' : 'pantelleritic'} ${name}` };
    }
    case 'R':
      if (agpaitic(values, i) > rules.peralkaline.above) return { ...plain, name: comenditic(values, i) ? 'comendite' : 'pantellerite' };
      return { ...plain, prefix: true };
    default:
      return { ...plain, prefix: rules.potassium.fields.includes(symbol) };
  }
}

function comenditic({ alumina, iron }: NamingValues, i: number): boolean {
  const { perIron, constant } = namingRules().peralkaline;
  return alumina![i] > perIron * iron![i] + constant;
}

/** High-magnesium rocks, on the volatile-free basis. */
function screenMagnesium(operands: Operands): Uint8Array {
  const found = new Uint8Array(operands.suite.size);
  const [silica, magnesia, titania, soda, potash] = ['SiO2', 'MgO', 'TiO2', 'Na2O', 'K2O'].map(
    (symbol) => operands.operand('volatile-free', symbol)?.values,
  );
  if (silica === undefined || magnesia === undefined) return found;
  const { boninite, komatiite, picrite } = namingRules();
  const inside = (value: number, { silicaFrom, silicaTo }: { silicaFrom: number; silicaTo: number }) => value > silicaFrom && value < silicaTo;
  for (let i = 0; i < found.length; i++) {
    // An unmeasured TiO2 meets neither limit.
    const ti = titania === undefined ? NaN : titania[i];
    const alkalis = soda === undefined || potash === undefined ? NaN : soda[i] + potash[i];
    const [si, mg] = [silica[i], magnesia[i]];
    if (si > boninite.silicaAbove && mg > boninite.magnesiaAbove && ti < boninite.titaniaBelow) found[i] = 1;
    else if (inside(si, komatiite) && mg > komatiite.magnesiaAbove && alkalis < komatiite.alkalisBelow && ti < komatiite.titania) found[i] = 2;
    else if (inside(si, komatiite) && mg > komatiite.magnesiaAbove && alkalis < komatiite.alkalisBelow && ti > komatiite.titania) found[i] = 3;
    else if (inside(si, picrite) && mg > picrite.magnesiaAbove && alkalis < picrite.alkalisBelow) found[i] = 4;
  }
  return found;
}

/** The volatile screen, on the analysis as it is. */
function screenVolatiles(suite: Suite): Uint8Array {
  const { waterAbove, carbonDioxideAbove } = namingRules().volatiles;
  const [water, carbon]: (Column | undefined)[] = ['H2O+', 'CO2'].map((symbol) => suite.columns.get(symbol));
  const screen = new Uint8Array(suite.size).fill(2);
  for (let i = 0; i < screen.length; i++) {
    const h = water === undefined ? NaN : water.values[i];
    const c = carbon === undefined ? NaN : carbon.values[i];
    if (h > waterAbove || c > carbonDioxideAbove) screen[i] = 1;
    else if (Number.isFinite(h)) screen[i] = 0;
  }
  return screen;
}

const rowsShown = 60;

function nameTable({ suite, names, fields, remarks }: Omit<RockNames, 'toMimeBundle'>) {
  const rows = Array.from({ length: Math.min(suite.size, rowsShown) }, (_, i): TableCell[] => [
    suite.samples[i],
    names[i] === '' ? 'not named' : names[i],
    fields[i],
    remarks[i],
  ]);
  return { title: 'Names by the IUGS rules', columns: ['sample', 'name', 'TAS field', 'remark'], rows, totalRows: suite.size };
}
