import { column, cellState, fillMissing, type Column } from '../suite';
import type { ReadSheet } from './read-sheet';

/** Sheets put together: columns and labels of all samples, and what has to be said about it. */
export interface Joined {
  readonly columns: readonly Column[];
  readonly labels: ReadonlyMap<string, readonly string[]>;
  readonly remarks: readonly string[];
}

/** How the rows of a second sheet lie on those of the first: for each of its rows, the row of the whole. */
export type RowMatch = { readonly to: Int32Array; readonly size: number } | { readonly refused: string };

const blankless = (name: string) => name.replace(/\s+/g, ' ').trim().toLowerCase();

/**
 * Matches the samples of two sheets: row by row where both list the same names in the same order, else by name where names are unique and
 * at least half of the shorter list occurs in the other.
 */
export function matchSamples(first: readonly string[], second: readonly string[]): RowMatch {
  const a = first.map(blankless);
  const b = second.map(blankless);
  if (a.length === b.length && a.every((name, i) => name === b[i])) return { to: Int32Array.from(b, (_, i) => i), size: a.length };
  const place = new Map(a.map((name, i) => [name, i]));
  const shared = b.filter((name) => name !== '' && place.has(name)).length;
  if (shared === 0 || shared < 0.5 * Math.min(a.length, b.length))
    return { refused: `${shared} of its ${b.length} sample names occur in the other sheet` };
  if (place.size < a.length || new Set(b).size < b.length) return { refused: 'sample names occur more than once, so rows cannot be matched' };
  let size = a.length;
  const to = Int32Array.from(b, (name) => place.get(name) ?? size++);
  return { to, size };
}

/** The rows of a second table put below those that are there. */
export function rowsBelow(known: readonly string[], names: readonly string[]): RowMatch {
  return { to: Int32Array.from(names, (_, i) => known.length + i), size: known.length + names.length };
}

/** Joins a second sheet to what is there. A quantity that both hold is completed where they hold it for different samples, else kept apart. */
export function joinSheet(whole: Joined, sheet: ReadSheet, match: { readonly to: Int32Array; readonly size: number }): Joined {
  const remarks = [...whole.remarks];
  const before = whole.labels.get('sample')!.length;
  const columns = whole.columns.map((each) => spread(each, undefined, match.size));
  for (const each of sheet.decoded.columns) {
    const placed = spread(each, match.to, match.size);
    const at = columns.findIndex(({ symbol }) => symbol === each.symbol);
    if (at < 0) columns.push(placed);
    else if (
      columns[at].unit === each.unit &&
      columns[at].states.every((state, i) => state === cellState.missing || placed.states[i] === cellState.missing)
    ) {
      columns[at] = fillMissing(columns[at], placed);
    } else {
      const symbol = `${each.symbol} (${sheet.name})`;
      remarks.push(`${each.symbol} stands in two sheets: that of "${sheet.name}" is kept as "${symbol}"`);
      columns.push({ ...placed, symbol, kind: 'quantity' });
    }
  }
  const labels = new Map([...whole.labels].map(([name, texts]) => [name, spreadTexts(texts, undefined, match.size)]));
  for (const [name, texts] of sheet.decoded.labels) {
    const placed = spreadTexts(texts, match.to, match.size);
    const known = labels.get(name);
    if (known === undefined) labels.set(name, placed);
    else if (name === 'sample' || known.every((text, i) => text === '' || placed[i] === '' || text === placed[i]))
      labels.set(
        name,
        known.map((text, i) => (text === '' ? placed[i] : text)),
      );
    else labels.set(`${name} (${sheet.name})`, placed);
  }
  if (match.size > before && match.size < before + sheet.layout.body.length)
    remarks.push(`${match.size - before} samples stand only in sheet "${sheet.name}"`);
  return { columns, labels, remarks };
}

function spread(from: Column, to: Int32Array | undefined, size: number): Column {
  if (to === undefined && from.values.length === size) return from;
  const place = (source: Float64Array | undefined) => {
    if (source === undefined) return undefined;
    const target = new Float64Array(size).fill(NaN);
    for (let i = 0; i < source.length; i++) target[to === undefined ? i : to[i]] = source[i];
    return target;
  };
  const states = new Uint8Array(size).fill(cellState.missing);
  for (let i = 0; i < from.states.length; i++) states[to === undefined ? i : to[i]] = from.states[i];
  return column({ ...from, values: place(from.values)!, states, limits: place(from.limits), sigma: place(from.sigma) });
}

function spreadTexts(texts: readonly string[], to: Int32Array | undefined, size: number): string[] {
  const placed = new Array<string>(size).fill('');
  texts.forEach((text, i) => (placed[to === undefined ? i : to[i]] = text));
  return placed;
}
