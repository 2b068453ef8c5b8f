import type { DataFrame } from 'danfojs-node';
import { findAnalyte } from '../chemistry';
import { column, type Column } from './column';
import { step } from './lineage';
import { Suite } from './suite';

/** The parts of a data frame that the library reads: it knows a frame by its shape, not by its class. */
export interface FrameLike {
  readonly columns: readonly string[];
  readonly values: readonly (readonly unknown[])[] | readonly unknown[];
}

/** danfojs-node takes half a second to load, so it is loaded when the first frame is asked for. */
export function toFrame(suite: Suite): DataFrame {
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const danfo = require('danfojs-node') as typeof import('danfojs-node');
  const labels = [...suite.labels];
  const columns = [...suite.columns.values()];
  const rows = Array.from({ length: suite.size }, (_, i) => [...labels.map(([, texts]) => texts[i]), ...columns.map(({ values }) => values[i])]);
  return new danfo.DataFrame(rows, { columns: [...labels.map(([name]) => name), ...columns.map(({ symbol }) => symbol)] });
}

export function isFrame(value: unknown): value is FrameLike {
  const frame = value as Partial<FrameLike> & { column?: unknown };
  return typeof value === 'object' && value !== null && Array.isArray(frame.columns) && Array.isArray(frame.values) && typeof frame.column === 'function';
}

/**
 * A suite from a data frame (danfojs or one of its shape). Columns named by a known symbol (`SiO2`, `Ba`) or holding only numbers become
 * columns in the library's units (oxides wt %, elements ppm); all others become labels. Copy values in good time: a frame computes in
 * single precision.
 *
 * @param frame rows × columns
 * @param options `units` by column name, for quantities that are not known analytes
 * @throws TypeError for something that is not a frame; RangeError for text in a known analyte's column
 */
export function fromFrame(frame: FrameLike, options: { readonly units?: Readonly<Record<string, string>> } = {}): Suite {
  if (!isFrame(frame)) throw new TypeError('fromFrame takes a data frame: an object with columns, values and column().');
  const table = frame.values as readonly (readonly unknown[])[];
  const labels = new Map<string, string[]>();
  const columns: Column[] = [];
  const empty = (cell: unknown) => cell === null || cell === undefined || cell === '' || (typeof cell === 'number' && Number.isNaN(cell));
  frame.columns.forEach((name, j) => {
    const cells = table.map((row) => row[j]);
    const bad = cells.findIndex((cell) => !empty(cell) && typeof cell !== 'number');
    if (bad >= 0 && findAnalyte(name) !== undefined) {
      throw new RangeError(`Frame column "${name}", row ${bad + 1}: "${String(cells[bad])}" is not a number. Use readAssays for sheets with text in number cells.`);
    }
    if (bad >= 0 || name.toLowerCase() === 'sample') labels.set(name.toLowerCase() === 'sample' ? 'sample' : name, cells.map((cell) => (empty(cell) ? '' : String(cell))));
    else columns.push(column({ symbol: name, values: cells.map((cell) => (empty(cell) ? NaN : (cell as number))), unit: options.units?.[name] }));
  });
  return new Suite({ columns, labels, lineage: [step('fromFrame', { rows: table.length, columns: frame.columns.length })] });
}
