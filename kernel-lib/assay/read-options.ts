import type { ColumnSetting } from './plan-columns';

/** How a sheet is read; everything not given is found in the sheet and told in the report. */
export interface ReadAssaysOptions {
  /** Name of the sheet of a workbook (default: the first that holds analyses, joined with others that hold more of the same samples). */
  readonly sheet?: string;
  /** What a column is, by its head (or `column C`): a symbol, `label`, `ignore`, or `{ as, unit }`, `{ label }`, `{ quantity, unit }`. */
  readonly columns?: Readonly<Record<string, ColumnSetting>>;
  /** Which method gives an analyte that was run by several, by symbol: `{ Zr: 'XRF' }`. */
  readonly prefer?: Readonly<Record<string, string>>;
  /** What columns that are not known become: text labels (default), or quantities where they hold numbers only. */
  readonly unknown?: 'labels' | 'quantities';
  /** What a negative concentration means (default: what the sheet says, else `error`: it is unreadable). */
  readonly negative?: 'below-detection' | 'error';
  /** What `n.d.` means (default: what the sheet says, else missing). */
  readonly notDetermined?: 'missing' | 'below-detection';
  /** What the number after ± in a cell is (default 1: 1σ). */
  readonly statedSigmas?: 1 | 2;
  readonly decimal?: '.' | ',';
  readonly delimiter?: ',' | ';' | '\t' | '|';
  readonly samplesIn?: 'rows' | 'columns';
  /** The row that holds the analyte names, counted from 1 (default: found). */
  readonly headerRow?: number;
  /** Whether total iron (`FeOT`) is completed row by row from whatever iron there is (default `complete`). */
  readonly iron?: 'complete' | 'as-given';
}

const allowed: Readonly<Record<keyof ReadAssaysOptions, readonly unknown[] | undefined>> = {
  sheet: undefined,
  columns: undefined,
  prefer: undefined,
  headerRow: undefined,
  unknown: ['labels', 'quantities'],
  negative: ['below-detection', 'error'],
  notDetermined: ['missing', 'below-detection'],
  statedSigmas: [1, 2],
  decimal: ['.', ','],
  delimiter: [',', ';', '\t', '|'],
  samplesIn: ['rows', 'columns'],
  iron: ['complete', 'as-given'],
};

/** @throws RangeError naming the option, what was given and what is allowed */
export function checkReadOptions(path: unknown, options: ReadAssaysOptions): void {
  if (typeof path !== 'string' || path === '')
    throw new RangeError('readAssays: path must be the path of a sheet, as text, e.g. "data/my-island.csv".');
  if (typeof options !== 'object' || options === null) throw new RangeError('readAssays: options must be an object, e.g. { sheet: "Majors" }.');
  for (const [name, value] of Object.entries(options)) {
    if (!Object.hasOwn(allowed, name)) throw new RangeError(`readAssays: there is no option "${name}". Options: ${Object.keys(allowed).join(', ')}.`);
    const choices = allowed[name as keyof ReadAssaysOptions];
    if (value !== undefined && choices !== undefined && !choices.includes(value)) {
      throw new RangeError(
        `readAssays: ${name} must be ${choices.map((choice) => JSON.stringify(choice)).join(' or ')}, not ${JSON.stringify(value)}.`,
      );
    }
  }
  const { headerRow } = options;
  if (headerRow !== undefined && !(Number.isInteger(headerRow) && headerRow >= 1))
    throw new RangeError(`readAssays: headerRow must be a row number from 1, not ${String(headerRow)}.`);
}
