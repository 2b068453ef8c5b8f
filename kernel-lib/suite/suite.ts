import { inspect } from 'node:util';
import { formatNumber, jupyterDisplay, tableBundle, type MimeBundle, type TableCell } from '../display';
import { cellState, cellStateNames, countStates, gatherColumn, type Column } from './column';
import { toFrame } from './frame';
import { step, type Step, type StepDetail, type Traced } from './lineage';

/** What `Suite.where` accepts for one column or label: a value, a list of values, or a range with either end left open. */
export type Criterion = string | number | readonly (string | number)[] | { readonly from?: number; readonly to?: number };

/** What a suite is made of. All columns and labels have one entry a sample. */
export interface SuiteParts {
  readonly columns: Iterable<Column>;
  /** Text by sample, by label name; the label `sample` holds the sample names. */
  readonly labels?: Readonly<Record<string, readonly string[]>> | ReadonlyMap<string, readonly string[]>;
  readonly lineage?: readonly Step[];
}

/**
 * An immutable table of analyses: columns of numbers with their cell states, text labels, and the lineage of steps that made it. Every
 * operation returns a new suite that shares the columns it did not change.
 */
export class Suite implements Traced {
  /** Number of samples (rows). */
  readonly size: number;
  readonly columns: ReadonlyMap<string, Column>;
  readonly labels: ReadonlyMap<string, readonly string[]>;
  readonly lineage: readonly Step[];

  /** Use `suiteOf`. */
  constructor(parts: SuiteParts) {
    const columns = new Map<string, Column>();
    const labels = new Map<string, readonly string[]>(parts.labels instanceof Map ? parts.labels : Object.entries(parts.labels ?? {}));
    let size: number | undefined;
    const check = (name: string, length: number) => {
      size ??= length;
      if (length !== size) throw new RangeError(`A suite needs one value a sample: "${name}" has ${length}, others have ${size}.`);
    };
    for (const [name, texts] of labels) check(name, texts.length);
    for (const entry of parts.columns) {
      check(entry.symbol, entry.values.length);
      if (columns.has(entry.symbol)) throw new RangeError(`A suite cannot hold two columns named "${entry.symbol}".`);
      columns.set(entry.symbol, entry);
    }
    this.size = size ?? 0;
    if (!labels.has('sample')) labels.set('sample', Array.from({ length: this.size }, (_, i) => String(i + 1)));
    this.columns = columns;
    this.labels = labels;
    this.lineage = parts.lineage ?? [];
  }

  /** Symbols of all columns, in order. */
  get analytes(): readonly string[] {
    return [...this.columns.keys()];
  }

  /** Sample names, one a row. */
  get samples(): readonly string[] {
    return this.labels.get('sample')!;
  }

  has(symbol: string): boolean {
    return this.columns.has(symbol);
  }

  /**
   * A column by its symbol.
   *
   * @throws RangeError naming the columns there are
   */
  column(symbol: string): Column {
    const found = this.columns.get(symbol);
    if (found === undefined) throw new RangeError(`This suite has no column "${symbol}". It has: ${this.analytes.join(', ') || 'none'}.`);
    return found;
  }

  /** The values of a column (n; NaN where there is none), in the column's unit. Do not write into it. */
  values(symbol: string): Float64Array {
    return this.column(symbol).values;
  }

  /**
   * A label by its name: one text a sample ('' where there is none).
   *
   * @throws RangeError naming the labels there are
   */
  label(name: string): readonly string[] {
    const found = this.labels.get(name);
    if (found === undefined) throw new RangeError(`This suite has no label "${name}". It has: ${[...this.labels.keys()].join(', ')}.`);
    return found;
  }

  /** The rows with the given numbers (from 0), in that order. */
  rows(numbers: ArrayLike<number>, because: Step = step('rows', { rows: numbers.length })): Suite {
    for (let i = 0; i < numbers.length; i++) {
      const row = numbers[i];
      if (!Number.isInteger(row) || row < 0 || row >= this.size) throw new RangeError(`Row ${row} is not in this suite; rows are 0 to ${this.size - 1}.`);
    }
    const labels = new Map<string, readonly string[]>();
    for (const [name, texts] of this.labels) labels.set(name, Array.from(numbers, (row) => texts[row]));
    return new Suite({ columns: [...this.columns.values()].map((entry) => gatherColumn(entry, numbers)), labels, lineage: [...this.lineage, because] });
  }

  /**
   * The samples that meet every criterion. A range includes both its ends; a cell without a usable value meets no range.
   *
   * @param criteria by column symbol or label name: a text or number, a list of them, or `{ from, to }` in the column's unit
   * @returns a suite of the rows that meet them, in their order
   * @throws RangeError for an unknown column or label
   * @example suite.where({ volcano: ['Tolva', 'Mera'], SiO2: { from: 52, to: 63 } })
   */
  where(criteria: Readonly<Record<string, Criterion>>): Suite {
    const kept = new Uint8Array(this.size).fill(1);
    for (const [name, criterion] of Object.entries(criteria)) {
      const keep = this.test(name, criterion);
      for (let i = 0; i < this.size; i++) if (!keep(i)) kept[i] = 0;
    }
    const numbers: number[] = [];
    for (let i = 0; i < this.size; i++) if (kept[i] === 1) numbers.push(i);
    return this.rows(numbers, step('where', { criteria: criteria as StepDetail, kept: numbers.length, of: this.size }));
  }

  private test(name: string, criterion: Criterion): (row: number) => boolean {
    if (this.columns.has(name)) {
      const { values } = this.column(name);
      if (typeof criterion === 'object' && !Array.isArray(criterion)) {
        const { from = -Infinity, to = Infinity } = criterion as { from?: number; to?: number };
        return (row) => values[row] >= from && values[row] <= to;
      }
      const wanted = new Set([criterion].flat().map(Number));
      return (row) => wanted.has(values[row]);
    }
    const texts = this.label(name);
    if (typeof criterion === 'object' && !Array.isArray(criterion)) throw new RangeError(`"${name}" is a label, so a range does not apply; give a text or a list of texts.`);
    const wanted = new Set([criterion].flat().map(String));
    return (row) => wanted.has(texts[row]);
  }

  /**
   * One sample by name.
   *
   * @throws RangeError when no row, or more than one, has that name
   */
  sample(name: string): Suite {
    const numbers: number[] = [];
    this.samples.forEach((text, i) => {
      if (text === name) numbers.push(i);
    });
    if (numbers.length === 0) throw new RangeError(`There is no sample "${name}". The first names are: ${this.samples.slice(0, 8).join(', ')}.`);
    if (numbers.length > 1) throw new RangeError(`"${name}" names ${numbers.length} rows (${numbers.map((i) => i + 1).join(', ')}). Choose one with rows([…]).`);
    return this.rows(numbers, step('sample', { sample: name }));
  }

  /**
   * The suite split by a label, in order of first appearance; samples without that label are under ''.
   *
   * @throws RangeError for an unknown label
   */
  groupBy(label: string): ReadonlyMap<string, Suite> {
    const groups = new Map<string, number[]>();
    this.label(label).forEach((text, i) => {
      const group = groups.get(text);
      if (group === undefined) groups.set(text, [i]);
      else group.push(i);
    });
    return new Map([...groups].map(([text, numbers]) => [text, this.rows(numbers, step('groupBy', { label, group: text }))]));
  }

  /** The suite with columns added or replaced, and the step that made them. */
  with(columns: Iterable<Column>, because: Step = step('with')): Suite {
    const all = new Map(this.columns);
    for (const entry of columns) all.set(entry.symbol, entry);
    return new Suite({ columns: all.values(), labels: this.labels, lineage: [...this.lineage, because] });
  }

  /** The suite with labels added or replaced (one text a sample). */
  withLabels(labels: Readonly<Record<string, readonly string[]>>, because: Step = step('withLabels', { labels: Object.keys(labels) })): Suite {
    return new Suite({ columns: this.columns.values(), labels: new Map([...this.labels, ...Object.entries(labels)]), lineage: [...this.lineage, because] });
  }

  /** The suite with only these columns, in this order. */
  only(symbols: readonly string[]): Suite {
    return new Suite({ columns: symbols.map((symbol) => this.column(symbol)), labels: this.labels, lineage: [...this.lineage, step('only', { columns: symbols })] });
  }

  /** A danfojs data frame: labels first, then a column a quantity (NaN where there is no usable value). Needs danfojs-node. */
  toFrame(): ReturnType<typeof toFrame> {
    return toFrame(this);
  }

  toMimeBundle(): MimeBundle {
    const shown = Math.min(this.size, 60);
    const labels = [...this.labels];
    const columns = [...this.columns.values()];
    const rows = Array.from({ length: shown }, (_, i): TableCell[] => [...labels.map(([, texts]) => texts[i]), ...columns.map((entry) => shownCell(entry, i))]);
    const heads = [...labels.map(([name]) => name), ...columns.map(({ symbol, unit }) => (unit === '' ? symbol : `${symbol} (${unit === 'wt%' ? 'wt %' : unit})`))];
    return tableBundle({ title: this.summary(), columns: heads, rows, totalRows: this.size });
  }

  private summary(): string {
    const counts = cellStateNames.map(() => 0);
    for (const entry of this.columns.values()) countStates(entry).forEach((count, state) => (counts[state] += count));
    const cells = cellStateNames.map((name, state) => `${counts[state]} ${name}`).filter((_, state) => counts[state] > 0);
    return `Suite of ${this.size} samples × ${this.columns.size} columns (cells: ${cells.join(', ') || 'none'})`;
  }

  [jupyterDisplay](): MimeBundle {
    return this.toMimeBundle();
  }

  [inspect.custom](): string {
    return this.summary();
  }
}

/** A cell as a reader sees it: the number, `<limit`, `>limit`, or nothing. */
function shownCell(entry: Column, row: number): TableCell {
  const state = entry.states[row];
  if (state === cellState.missing) return null;
  if (state === cellState.belowDetection || state === cellState.aboveRange) {
    const limit = entry.limits?.[row] ?? NaN;
    return `${state === cellState.belowDetection ? '<' : '>'}${Number.isNaN(limit) ? ' limit' : formatNumber(limit)}`;
  }
  return entry.values[row];
}

/**
 * Makes a suite from columns and labels.
 *
 * @param parts `columns` (each n cells), `labels` (by name, n texts each; `sample` holds the names), optional `lineage`
 * @throws RangeError when lengths differ or two columns share a symbol
 * @example suiteOf({ columns: [column({ symbol: 'SiO2', values: [52.1, 60.4] })], labels: { sample: ['A', 'B'] } })
 */
export function suiteOf(parts: SuiteParts): Suite {
  return new Suite(parts);
}
