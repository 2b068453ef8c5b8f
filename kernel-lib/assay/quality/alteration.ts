import { z } from 'zod';
import { evaluate, expressionSymbols, parseExpression, resolveColumn, type Suite } from '../../suite';
import { field, molarMass, once, readCsvTable, reservoir, type Standing } from '../../tables';
import { median } from './recoveries';

/** One rule of the alteration screen: a quantity and the range that fresh lavas keep. */
export interface AlterationRule {
  readonly key: string;
  readonly expression: string;
  readonly low?: number;
  readonly high?: number;
  /** One decisive rule, or two hints, make a sample altered. */
  readonly weight: 'decisive' | 'hint';
  /** Where the rule applies: '' everywhere, else a condition such as `SiO2 > 52`. */
  readonly applies: string;
  readonly reason: string;
  readonly source: string;
  readonly standing: Standing;
}

/** What the alteration screen says of every sample. */
export interface AlterationScreen {
  readonly verdict: readonly ('fresh' | 'suspect' | 'altered' | 'not determined')[];
  /** The reasons in words, '' for fresh. */
  readonly reason: readonly string[];
  /** How many rules could be asked of each sample. */
  readonly asked: Uint8Array;
  /** The quantities of the rules, n each: `LOI`, `AI`, `CCPI`, `CIA`, `Ce/Ce*` …, by reason. */
  readonly quantities: ReadonlyMap<string, Float64Array>;
  /** Axes of the sodium–potassium spectrum of Hughes (1973): 100·K2O/(K2O+Na2O), and K2O+Na2O in wt %. */
  readonly alkaliShare: Float64Array;
  readonly alkalis: Float64Array;
  readonly rulesNotAsked: readonly string[];
}

export interface AlterationOptions {
  /** Other limits by rule key, or null to leave a rule out. */
  readonly limits: Readonly<Record<string, { readonly low?: number; readonly high?: number } | null>>;
  /** The igneous spectrum of Hughes (1973) as two lines of [100·K2O/(K2O+Na2O), K2O+Na2O], soda side and potash side; not shipped. */
  readonly spectrum?: { readonly soda: readonly (readonly [number, number])[]; readonly potash: readonly (readonly [number, number])[] };
  /** Label within which mobile elements are held against immobile ones. */
  readonly group: string;
}

const file = 'alteration-screen.csv';
const rowSchema = z.strictObject({
  key: field.text,
  expression: field.text,
  low: field.optionalNumber,
  high: field.optionalNumber,
  weight: z.enum(['decisive', 'hint']),
  applies: field.optionalText,
  reason: field.text,
  source: field.text,
  standing: field.standing,
  note: field.optionalText,
});

/** @internal The rules of reference-tables/alteration-screen.csv. */
export const alterationRules = once((): readonly AlterationRule[] => readCsvTable(file, rowSchema));

/** Elements that fluids move, each held against the best immobile one the suite has. */
const mobile = ['K2O', 'Rb', 'Cs', 'Ba', 'Sr', 'U', 'Na2O'] as const;
const immobile = ['Th', 'Nb', 'Zr', 'La'] as const;
const fewestForTrend = 15;
/** Scaled median deviations beyond which a mobile element is out of line. */
const outOfLine = 4;

/** Screens every sample for alteration. */
export function screenAlteration(suite: Suite, options: AlterationOptions): AlterationScreen {
  const { size } = suite;
  const decisive = new Uint8Array(size);
  const hints = new Uint8Array(size);
  const asked = new Uint8Array(size);
  const reasons: string[][] = Array.from({ length: size }, () => []);
  const quantities = new Map<string, Float64Array>();
  const rulesNotAsked: string[] = [];
  for (const rule of alterationRules()) {
    const other = options.limits[rule.key];
    if (other === null) continue;
    const { low, high } = other ?? rule;
    const values = rule.expression === 'CIA' ? indexOfAlteration(suite) : quantity(suite, rule.expression);
    if (values === undefined) {
      rulesNotAsked.push(rule.key);
      continue;
    }
    quantities.set(rule.reason, values);
    const applies = condition(suite, rule.applies);
    for (let i = 0; i < size; i++) {
      if (!Number.isFinite(values[i]) || !applies(i)) continue;
      asked[i]++;
      const below = low !== undefined && values[i] < low;
      if (!below && !(high !== undefined && values[i] > high)) continue;
      (rule.weight === 'decisive' ? decisive : hints)[i]++;
      reasons[i].push(`${rule.reason} ${short(values[i])} ${below ? `below ${low}` : `above ${high}`}`);
    }
  }
  const alkalis = quantity(suite, 'Na2O+K2O') ?? new Float64Array(size).fill(NaN);
  const alkaliShare = quantity(suite, '100*K2O/(Na2O+K2O)') ?? new Float64Array(size).fill(NaN);
  if (options.spectrum !== undefined) {
    const { soda, potash } = options.spectrum;
    for (let i = 0; i < size; i++) {
      if (!Number.isFinite(alkalis[i])) continue;
      const outside = alkaliShare[i] < acrossAt(soda, alkalis[i]) ? 'Na2O' : alkaliShare[i] > acrossAt(potash, alkalis[i]) ? 'K2O' : '';
      if (outside === '') continue;
      hints[i]++;
      reasons[i].push(`outside the igneous spectrum on the ${outside} side`);
    }
  }
  mobileOutOfLine(suite, options.group, hints, reasons);
  const verdict = Array.from({ length: size }, (_, i) =>
    decisive[i] > 0 || hints[i] > 1 ? 'altered' : hints[i] === 1 ? 'suspect' : asked[i] < 3 ? 'not determined' : 'fresh',
  );
  return { verdict, reason: reasons.map((each) => each.join('; ')), asked, quantities, alkaliShare, alkalis, rulesNotAsked };
}

const short = (value: number) => String(Number(value.toPrecision(4)));

function quantity(suite: Suite, expression: string): Float64Array | undefined {
  const chondrite = reservoir('chondrite-c1-1989');
  for (const symbol of expressionSymbols(parseExpression(expression))) if (resolveColumn(suite, symbol) === undefined) return undefined;
  return evaluate(suite, expression, { sigma: false, reference: (symbol) => chondrite.values.get(symbol)?.value ?? NaN }).values;
}

function condition(suite: Suite, text: string): (row: number) => boolean {
  if (text === '') return () => true;
  const [, symbol, relation, limit] = /^(\S+) ([<>]) (\S+)$/.exec(text)!;
  const values = resolveColumn(suite, symbol)?.values;
  return (row) => values !== undefined && (relation === '>' ? values[row] > Number(limit) : values[row] < Number(limit));
}

/** 100 · Al2O3 / (Al2O3 + CaO* + Na2O + K2O), molar; CaO* without that of apatite (Nesbitt & Young 1982). */
function indexOfAlteration(suite: Suite): Float64Array | undefined {
  const [alumina, lime, soda, potash, phosphorus] = ['Al2O3', 'CaO', 'Na2O', 'K2O', 'P2O5'].map((oxide) => resolveColumn(suite, oxide)?.values);
  if (alumina === undefined || lime === undefined || soda === undefined || potash === undefined) return undefined;
  const per = ['Al2O3', 'CaO', 'Na2O', 'K2O', 'P2O5'].map((oxide) => 1 / molarMass(oxide));
  return alumina.map((_, i) => {
    const apatite = phosphorus !== undefined && Number.isFinite(phosphorus[i]) ? (10 / 3) * phosphorus[i] * per[4] : 0;
    const al = alumina[i] * per[0];
    return (100 * al) / (al + Math.max(0, lime[i] * per[1] - apatite) + soda[i] * per[2] + potash[i] * per[3]);
  });
}

/** Where a line given by points stands at a height. */
function acrossAt(line: readonly (readonly [number, number])[], height: number): number {
  for (let k = 1; k < line.length; k++) {
    const [x0, y0] = line[k - 1];
    const [x1, y1] = line[k];
    if ((height - y0) * (height - y1) <= 0 && y1 !== y0) return x0 + ((x1 - x0) * (height - y0)) / (y1 - y0);
  }
  return NaN;
}

/**
 * Mobile elements against immobile ones: within a group, log X against log of the immobile element follows a robust line (Theil and Sen);
 * a sample more than four scaled median deviations, and a factor of two, off the line is out of line. An element that does not follow the
 * immobile one has a wide scatter, so it accuses nobody.
 */
function mobileOutOfLine(suite: Suite, group: string, hints: Uint8Array, reasons: string[][]): void {
  const names = suite.labels.get(group);
  const groups = new Map<string, number[]>();
  for (let i = 0; i < suite.size; i++) {
    const key = names?.[i] ?? '';
    const rows = groups.get(key);
    if (rows === undefined) groups.set(key, [i]);
    else rows.push(i);
  }
  const steady = immobile.map((symbol) => ({ symbol, values: resolveColumn(suite, symbol)?.values })).filter(({ values }) => values !== undefined);
  for (const symbol of mobile) {
    const values = resolveColumn(suite, symbol)?.values;
    if (values === undefined) continue;
    for (const rows of groups.values()) {
      const against = steady.find((each) => rows.filter((i) => values[i] > 0 && each.values![i] > 0).length >= fewestForTrend);
      if (against === undefined) continue;
      const used = rows.filter((i) => values[i] > 0 && against.values![i] > 0);
      const x = used.map((i) => Math.log(against.values![i]));
      const y = used.map((i) => Math.log(values[i]));
      const off = robustResiduals(x, y);
      const scale = 1.4826 * median(off.map(Math.abs));
      used.forEach((row, k) => {
        if (Math.abs(off[k]) <= Math.max(outOfLine * scale, Math.LN2)) return;
        hints[row]++;
        reasons[row].push(`${symbol} ${short(Math.exp(off[k]))} times what ${against.symbol} allows`);
      });
    }
  }
}

const mostForSlopes = 300;

/** Residuals from the Theil–Sen line: median of the slopes between points, median intercept. */
function robustResiduals(x: readonly number[], y: readonly number[]): number[] {
  const stride = Math.max(1, Math.ceil(x.length / mostForSlopes));
  const slopes: number[] = [];
  for (let i = 0; i < x.length; i += stride)
    for (let j = i + stride; j < x.length; j += stride) if (x[i] !== x[j]) slopes.push((y[j] - y[i]) / (x[j] - x[i]));
  const slope = slopes.length === 0 ? 0 : median(slopes);
  const rest = x.map((each, i) => y[i] - slope * each);
  const level = median(rest);
  return rest.map((each) => each - level);
}
