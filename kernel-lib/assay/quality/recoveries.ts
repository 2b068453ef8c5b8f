import { jStat } from 'jstat';
import { mean as meanOf, median as medianOf } from 'simple-statistics';
import { findAnalyte } from '../../chemistry';
import type { Column, Suite } from '../../suite';
import { materialValue, rockMaterial, type RockMaterial } from './rock-materials';

/** One analyte of one run of a reference material. */
export interface Recovery {
  readonly row: number;
  readonly sample: string;
  readonly material: string;
  readonly analyte: string;
  readonly measured: number;
  readonly certified: number;
  /** Measured over certified, %. */
  readonly recovery: number;
  /** (measured − certified) over the 1σ of the certified value (with the measurement's own 1σ where the suite has it); NaN where none is known. */
  readonly z: number;
}

/** How well the reference materials say an analyte was measured. */
export interface AccuracyVerdict {
  readonly analyte: string;
  readonly runs: number;
  /** Mean of (measured/certified − 1), %; NaN where not covered. */
  readonly bias: number;
  /** Standard deviation of the recoveries, %; NaN for a single run. */
  readonly spread: number;
  /** 1σ of the mean bias, %: from the spread, the number of runs and the certified value's own 1σ. */
  readonly biasSigma: number;
  readonly verdict: 'fit' | 'biased' | 'not covered';
  readonly words: string;
  /** Runs beyond 3σ of the others, and a run of eight on one side of the certified value. */
  readonly chart: readonly string[];
}

/** A row whose composition is that of another: two samples may have been exchanged. */
export interface MixUp {
  readonly row: number;
  readonly sample: string;
  readonly expected: string;
  /** A row that does fit, or -1. */
  readonly fits: number;
  readonly words: string;
}

export interface MaterialOptions {
  /** Source by material, where not the default one. */
  readonly certificates: Readonly<Record<string, string>>;
  /** Largest bias that passes as fit, % (default 2: common practice). */
  readonly tolerance: number;
}

/** Small names are also names of samples: a row counts as such a material only if it looks like it. */
const shortName = (name: string) => name.replace(/[^A-Za-z0-9]/g, '').length <= 3;

/**
 * The rows that are reference materials, and those that are named so but hold something else.
 *
 * A row is compared by the median of |ln(measured/certified)| over all analytes: a laboratory's bias moves one analyte, a mix-up all.
 */
export function checkMaterials(
  suite: Suite,
  named: readonly string[],
  options: MaterialOptions,
): { rows: Map<number, RockMaterial>; mixUps: MixUp[] } {
  const rows = new Map<number, RockMaterial>();
  const mixUps: MixUp[] = [];
  const columns = comparable(suite);
  for (let row = 0; row < suite.size; row++) {
    if (named[row] === '') continue;
    const material = rockMaterial(named[row], options.certificates[named[row]]);
    const { distance, analytes } = distanceTo(columns, row, material);
    if (analytes < 3 || distance < 0.12) {
      if (analytes > 0) rows.set(row, material);
      continue;
    }
    if (shortName(named[row]) && distance > 0.25) continue;
    const fits = nearestRow(suite, columns, material, named);
    const sample = suite.samples[row];
    mixUps.push({
      row,
      sample,
      expected: material.material,
      fits,
      words: `row ${row + 1} "${sample}" does not have the composition of ${material.material} (typically off by ${Math.round(100 * (Math.exp(distance) - 1))} %)${fits < 0 ? '' : `, but row ${fits + 1} "${suite.samples[fits]}" has: were they exchanged?`}`,
    });
  }
  return { rows, mixUps };
}

function comparable(suite: Suite): Column[] {
  return [...suite.columns.values()].filter(({ symbol }) => findAnalyte(symbol)?.kind === 'oxide' || findAnalyte(symbol)?.kind === 'element');
}

function distanceTo(columns: readonly Column[], row: number, material: RockMaterial): { distance: number; analytes: number } {
  const offs: number[] = [];
  for (const { symbol, values } of columns) {
    const certified = materialValue(material, symbol);
    if (certified !== undefined && certified.value > 0 && values[row] > 0) offs.push(Math.abs(Math.log(values[row] / certified.value)));
  }
  return { distance: median(offs), analytes: offs.length };
}

function nearestRow(suite: Suite, columns: readonly Column[], material: RockMaterial, named: readonly string[]): number {
  let best = -1;
  let least = 0.06;
  for (let row = 0; row < suite.size; row++) {
    if (named[row] !== '') continue;
    const { distance, analytes } = distanceTo(columns, row, material);
    if (analytes >= 3 && distance < least) {
      best = row;
      least = distance;
    }
  }
  return best;
}

/** Recoveries of every run, in order of the rows (taken as the order of analysis). */
export function recoveries(suite: Suite, rows: ReadonlyMap<number, RockMaterial>): Recovery[] {
  const found: Recovery[] = [];
  for (const [row, material] of [...rows].sort(([a], [b]) => a - b)) {
    for (const { symbol, values, sigma } of comparable(suite)) {
      const certified = materialValue(material, symbol);
      if (certified === undefined || !(certified.value > 0) || !Number.isFinite(values[row])) continue;
      const own = sigma?.[row] ?? NaN;
      const spread = Math.hypot(certified.sigma, Number.isNaN(own) ? 0 : own);
      found.push({
        row,
        sample: suite.samples[row],
        material: material.material,
        analyte: symbol,
        measured: values[row],
        certified: certified.value,
        recovery: (100 * values[row]) / certified.value,
        z: spread > 0 ? (values[row] - certified.value) / spread : NaN,
      });
    }
  }
  return found;
}

/** A verdict for every analyte of the suite. */
export function accuracy(
  suite: Suite,
  rows: ReadonlyMap<number, RockMaterial>,
  runs: readonly Recovery[],
  options: MaterialOptions,
): AccuracyVerdict[] {
  return comparable(suite).map(({ symbol }): AccuracyVerdict => {
    const own = runs.filter(({ analyte }) => analyte === symbol);
    if (own.length === 0)
      return { analyte: symbol, runs: 0, bias: NaN, spread: NaN, biasSigma: NaN, verdict: 'not covered', words: 'not covered', chart: [] };
    const offs = own.map(({ recovery }) => recovery - 100);
    const bias = mean(offs);
    const spread = own.length > 1 ? Math.sqrt(offs.reduce((sum, off) => sum + (off - bias) ** 2, 0) / (own.length - 1)) : NaN;
    const certifiedSigma = mean(
      own
        .map(({ row, certified }) => (100 * (materialValue(rows.get(row)!, symbol)?.sigma ?? NaN)) / certified)
        .map((each) => (Number.isNaN(each) ? 0 : each)),
    );
    const biasSigma = Math.hypot(certifiedSigma, Number.isNaN(spread) ? 0 : spread / Math.sqrt(own.length));
    // A bias counts when it is real (outside its 95 % interval, of few runs by Student's t) and when it matters (beyond the tolerance).
    const biased = Math.abs(bias) > studentFactor(own.length - 1) * biasSigma && Math.abs(bias) > options.tolerance;
    const words = biased ? `biased by ${signed(bias)} %` : `fit (bias ${signed(bias)} %)`;
    return { analyte: symbol, runs: own.length, bias, spread, biasSigma, verdict: biased ? 'biased' : 'fit', words, chart: chartSignals(own) };
  });
}

/** Two-sided 95 % factor of Student's t. For a single run nothing but the certified value's own 1σ is known: then the usual 2. */
function studentFactor(freedom: number): number {
  return freedom < 1 ? 2 : jStat.studentt.inv(0.975, freedom);
}

/** Signals of a control chart by order of analysis (Shewhart's rules: one point beyond 3σ of the others; eight in a row on one side). */
function chartSignals(own: readonly Recovery[]): string[] {
  const signals: string[] = [];
  if (own.length >= 5) {
    own.forEach((run, i) => {
      const others = own.filter((_, j) => j !== i).map(({ recovery }) => recovery);
      const centre = mean(others);
      const spread = Math.sqrt(others.reduce((sum, each) => sum + (each - centre) ** 2, 0) / (others.length - 1));
      if (spread > 0 && Math.abs(run.recovery - centre) > 3 * spread * Math.sqrt(1 + 1 / others.length) && Math.abs(run.recovery - centre) > 1)
        signals.push(`row ${run.row + 1} "${run.sample}" recovers ${run.recovery.toFixed(1)} %, the others ${centre.toFixed(1)} %`);
    });
  }
  for (let i = 7; i < own.length; i++) {
    const side = own.slice(i - 7, i + 1).map(({ recovery }) => Math.sign(recovery - 100));
    if (Math.abs(side.reduce((sum, each) => sum + each, 0)) === 8) {
      signals.push(`eight runs in a row ${side[0] > 0 ? 'above' : 'below'} the certified value, up to row ${own[i].row + 1}`);
      break;
    }
  }
  return signals;
}

const signed = (value: number) => `${value >= 0 ? '+' : '−'}${Math.abs(value).toFixed(1)}`;

/** Mean; NaN of nothing. */
export function mean(values: readonly number[]): number {
  return values.length === 0 ? NaN : meanOf(values as number[]);
}

/** Median; NaN of nothing. */
export function median(values: readonly number[]): number {
  return values.length === 0 ? NaN : medianOf(values as number[]);
}
