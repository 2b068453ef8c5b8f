import { column, type Column, type Suite } from '../../suite';
import type { DuplicatePrecision } from './duplicates';
import type { Recovery } from './recoveries';

/** What the user states of an analyte's 1σ: a percentage of the value, or a size in the column's unit. */
export type StatedSigma = { readonly percent: number } | { readonly absolute: number };

/** Where the 1σ of a column comes from. */
export interface ColumnSigma {
  readonly analyte: string;
  readonly from: 'duplicates' | 'reference materials' | 'stated by the user' | 'stated in the sheet' | 'none';
  /** 1σ at the median of the column, in its unit; NaN for none. */
  readonly typical: number;
  readonly words: string;
}

const fewestDuplicates = 3;
const fewestRuns = 2;

/**
 * Gives every column its 1σ: from duplicates (the line against concentration where there is one, else the pooled relative deviation of at
 * least three), else from the reference materials (root mean square of recovery − 1 over at least two runs), else what the user states,
 * else what the sheet states, else none.
 */
export function columnSigmas(
  suite: Suite,
  duplicates: readonly DuplicatePrecision[],
  runs: readonly Recovery[],
  stated: Readonly<Record<string, StatedSigma>>,
): { columns: Column[]; sigmas: ColumnSigma[] } {
  const columns: Column[] = [];
  const sigmas: ColumnSigma[] = [];
  const precision = new Map(duplicates.map((each) => [each.analyte, each]));
  for (const each of suite.columns.values()) {
    const chosen = choose(
      each,
      precision.get(each.symbol),
      runs.filter(({ analyte }) => analyte === each.symbol),
      Object.hasOwn(stated, each.symbol) ? stated[each.symbol] : undefined,
    );
    if (chosen === undefined) {
      if (each.sigma !== undefined) sigmas.push({ analyte: each.symbol, from: 'stated in the sheet', typical: NaN, words: 'as stated in the sheet' });
      else if (each.kind !== 'quantity')
        sigmas.push({ analyte: each.symbol, from: 'none', typical: NaN, words: 'no duplicates, no reference material, nothing stated' });
      continue;
    }
    const sigma = each.values.map((value) => (Number.isFinite(value) ? chosen.at(value) : NaN));
    columns.push(column({ ...each, sigma }));
    sigmas.push({ analyte: each.symbol, from: chosen.from, typical: chosen.at(middle(each.values)), words: chosen.words });
  }
  return { columns, sigmas };
}

interface Chosen {
  readonly from: ColumnSigma['from'];
  readonly words: string;
  at(value: number): number;
}

function choose(
  { unit }: Column,
  duplicates: DuplicatePrecision | undefined,
  runs: readonly Recovery[],
  stated: StatedSigma | undefined,
): Chosen | undefined {
  if (duplicates?.line !== undefined && duplicates.line.slope > 0) {
    const { intercept, slope, pairs } = duplicates.line;
    const floor = Math.max(0, intercept);
    return {
      from: 'duplicates',
      words: `${round(floor)} ${unit} + ${round(100 * slope)} % of the value, from ${pairs} pairs`,
      at: (value) => floor + slope * Math.abs(value),
    };
  }
  if (duplicates !== undefined && duplicates.degreesOfFreedom >= fewestDuplicates && duplicates.relative > 0) {
    const share = duplicates.relative / 100;
    return {
      from: 'duplicates',
      words: `${round(duplicates.relative)} %, pooled from ${duplicates.groups} groups`,
      at: (value) => share * Math.abs(value),
    };
  }
  if (runs.length >= fewestRuns) {
    const share = Math.sqrt(runs.reduce((sum, { recovery }) => sum + (recovery / 100 - 1) ** 2, 0) / runs.length);
    if (share > 0)
      return {
        from: 'reference materials',
        words: `${round(100 * share)} %, from ${runs.length} runs of reference materials, bias included`,
        at: (value) => share * Math.abs(value),
      };
  }
  if (stated === undefined) return undefined;
  return 'percent' in stated
    ? { from: 'stated by the user', words: `${stated.percent} %, as stated`, at: (value) => (stated.percent / 100) * Math.abs(value) }
    : { from: 'stated by the user', words: `${stated.absolute} ${unit}, as stated`, at: () => stated.absolute };
}

const round = (value: number) => Number(value.toPrecision(2));

function middle(values: Float64Array): number {
  const sorted = values.filter(Number.isFinite).sort();
  return sorted.length === 0 ? NaN : sorted[sorted.length >> 1];
}
