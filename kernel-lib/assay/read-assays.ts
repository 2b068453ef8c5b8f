import { showAs, type Showable } from '../display';
import { totalIron, type TotalIronCounts } from '../recast';
import { step, suiteOf, type Column, type StepDetail, type Suite, type Traced } from '../suite';
import { cellLook, type Grid } from './grid';
import { AssayError } from './errors';
import { DelimitedGrid } from './delimited';
import type { CellConventions } from './cells';
import { decodeColumns, type DecodedSheet } from './decode-columns';
import { findLayout, type Layout } from './layout';
import { openFile, type OpenFile, type OpenSheet } from './open-file';
import { planColumns, type ColumnSetting } from './plan-columns';
import { reportView, type ImportReport } from './report';

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
  /** What a negative concentration means (default `error`: it is unreadable). */
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

/** What `readAssays` gives; a notebook shows it as the import report. */
export interface Assays extends Traced, Showable {
  readonly suite: Suite;
  readonly report: ImportReport;
}

/**
 * Reads an assay sheet: .csv, .tsv (any delimiter and common encoding), .xlsx, .xls, .ods.
 *
 * Oxides become wt %, elements ppm; isotope ratios stay bare numbers; what is not an analyte becomes a text label. Below-detection and
 * above-range cells keep their limit and hold no number; a cell that cannot be read is missing, and listed with its address. Total iron
 * (`FeOT`) is completed row by row: a reported total wins, `FeO` and `Fe2O3` both measured are summed, one of them alone is taken as total
 * and counted as such.
 *
 * @param path of the file, from the notebook's folder
 * @param options see `ReadAssaysOptions`; `columns: { 'Zr XRF': 'ignore', 'Au': { unit: 'ppb' } }` settles single columns
 * @returns `suite` (n samples), `report` (what every column became, what was inferred, left out, and should be checked), `lineage`
 * @throws AssayError for a file that cannot be opened or understood; RangeError for an unknown option
 * @example const { suite, report } = await readAssays('notebooks/data/oruvai-arc.csv')
 */
export async function readAssays(path: string, options: ReadAssaysOptions = {}): Promise<Assays> {
  checkOptions(path, options);
  const opened = await openFile(path, { delimiter: options.delimiter });
  const sheets = opened.sheets.map((sheet) => ({ sheet, layout: findLayout(sheet.grid, { samplesIn: options.samplesIn, headerRow: options.headerRow === undefined ? undefined : options.headerRow - 1 }) }));
  const chosen = chooseSheet(opened, sheets, options.sheet);
  const read = readSheet(opened, chosen.sheet, chosen.layout, options);
  const { decoded, conventions, inferred, ignored, pleaseCheck } = read;
  if (chosen.layout.body.length === 0) throw new AssayError(`${whereIs(opened, chosen.sheet)}: there is a head row (row ${chosen.layout.header.analyte + 1}) but no samples below it.`);
  let columns: Column[] = decoded.columns;
  let iron: TotalIronCounts | undefined;
  if (options.iron !== 'as-given' && columns.some(({ symbol }) => /^(FeOT|Fe2O3T|FeO|Fe2O3)$/.test(symbol))) {
    const total = totalIron(suiteOf({ columns, labels: decoded.labels }));
    iron = total.counts;
    columns = [...columns.filter(({ symbol }) => symbol !== 'FeOT'), total.column];
    columns = inPlace(columns, decoded.columns);
    if (iron.ferricAlone + iron.ferrousAlone > 0) {
      pleaseCheck.push(`total iron: ${iron.ferricAlone} rows have Fe2O3 alone and ${iron.ferrousAlone} FeO alone, taken as total iron`);
    }
  }
  const report: ImportReport = showAs(
    {
      file: opened.file, sha256: opened.sha256, encoding: opened.encoding ?? '', delimiter: opened.delimiter ?? '', decimal: conventions.decimal,
      sheets: sheets.map(({ sheet, layout }) => ({ name: sheet.name, rows: sheet.grid.rows, columns: sheet.grid.columns, holds: holds(layout) })),
      sheetsRead: [chosen.sheet.name], samplesIn: chosen.layout.samplesIn, rows: chosen.layout.body.length, columns: decoded.imported,
      ...(iron === undefined ? {} : { iron }), inferred, ignored, pleaseCheck: [...inferred, ...pleaseCheck],
    },
    reportView,
  );
  const because = step(
    'readAssays',
    {
      file: opened.file, sha256: opened.sha256, sheet: chosen.sheet.name, encoding: report.encoding, delimiter: report.delimiter, decimal: report.decimal,
      samplesIn: report.samplesIn, headerRow: chosen.layout.header.analyte + 1, rows: report.rows,
      columns: decoded.imported.map(({ place, head, became, name, sheetUnit, factor }) => ({ place, head, became, name, unit: sheetUnit, factor })),
      inferred, settled: JSON.parse(JSON.stringify(options)) as StepDetail, ...(iron === undefined ? {} : { ironFound: { ...iron } }),
    },
    { tables: ['analyte-spellings.json', 'plausible-ranges.csv', 'atomic-weights.csv'] },
  );
  const suite = suiteOf({ columns, labels: decoded.labels, lineage: [because] });
  return showAs({ suite, report, lineage: suite.lineage }, () => reportView(report));
}

function checkOptions(path: string, options: ReadAssaysOptions): void {
  if (typeof path !== 'string' || path === '') throw new RangeError('readAssays: path must be the path of a sheet, as text, e.g. "data/my-island.csv".');
  const allowed: Readonly<Record<string, readonly unknown[] | undefined>> = {
    sheet: undefined, columns: undefined, prefer: undefined, headerRow: undefined,
    unknown: ['labels', 'quantities'], negative: ['below-detection', 'error'], notDetermined: ['missing', 'below-detection'], statedSigmas: [1, 2],
    decimal: ['.', ','], delimiter: [',', ';', '\t', '|'], samplesIn: ['rows', 'columns'], iron: ['complete', 'as-given'],
  };
  for (const [name, value] of Object.entries(options)) {
    if (!Object.hasOwn(allowed, name)) throw new RangeError(`readAssays: there is no option "${name}". Options: ${Object.keys(allowed).join(', ')}.`);
    const choices = allowed[name];
    if (value !== undefined && choices !== undefined && !choices.includes(value)) {
      throw new RangeError(`readAssays: ${name} must be ${choices.map((choice) => JSON.stringify(choice)).join(' or ')}, not ${JSON.stringify(value)}.`);
    }
  }
  const { headerRow } = options;
  if (headerRow !== undefined && !(Number.isInteger(headerRow) && headerRow >= 1)) throw new RangeError(`readAssays: headerRow must be a row number from 1, not ${String(headerRow)}.`);
}

type LaidOut = { readonly sheet: OpenSheet; readonly layout: Layout | undefined };

function chooseSheet(opened: OpenFile, sheets: readonly LaidOut[], wanted: string | undefined): { sheet: OpenSheet; layout: Layout } {
  const found = wanted === undefined ? sheets.find(({ layout, sheet }) => layout !== undefined && !sheet.hidden) ?? sheets.find(({ layout }) => layout !== undefined) : sheets.find(({ sheet }) => sheet.name === wanted);
  if (found === undefined && wanted !== undefined) {
    throw new AssayError(`${opened.file} has no sheet "${wanted}". Its sheets: ${sheets.map(({ sheet, layout }) => `${sheet.name} (${holds(layout)})`).join(', ')}.`);
  }
  if (found?.layout === undefined) {
    throw new AssayError(`${opened.file}: no head row was found: no row or column names analytes such as SiO2, "Ba (ppm)" or FeO*. Give headerRow, or columns: { 'head': 'SiO2' }.`);
  }
  return { sheet: found.sheet, layout: found.layout };
}

function holds(layout: Layout | undefined): string {
  if (layout === undefined) return 'no analyses';
  return `${layout.body.length} samples in ${layout.samplesIn}, head ${layout.samplesIn === 'rows' ? 'row' : 'column'} ${layout.header.analyte + 1}`;
}

function whereIs(opened: OpenFile, sheet: OpenSheet): string {
  return sheet.name === '' ? opened.file : `${opened.file}, sheet "${sheet.name}"`;
}

interface ReadSheet {
  readonly decoded: DecodedSheet;
  readonly conventions: CellConventions;
  readonly inferred: string[];
  readonly ignored: string[];
  readonly pleaseCheck: string[];
}

function readSheet(opened: OpenFile, sheet: OpenSheet, layout: Layout, options: ReadAssaysOptions): ReadSheet {
  const decimal = options.decimal ?? decimalMark(layout);
  if (sheet.grid instanceof DelimitedGrid) sheet.grid.useDecimal(decimal);
  const { columns, notes } = planColumns(layout, { columns: options.columns ?? {}, prefer: options.prefer ?? {}, unknown: options.unknown ?? 'labels' });
  const conventions: CellConventions = {
    decimal,
    negative: options.negative ?? 'error',
    notDetermined: options.notDetermined ?? 'missing',
    statedSigmas: options.statedSigmas ?? 1,
  };
  const decoded = decodeColumns(layout, columns, conventions, sheet.name);
  const ignored = [...notes.ignored, ...layout.skipped.slice(0, 40).map(({ row, why, text }) => `row ${row + 1}: ${why}${text === '' ? '' : ` ("${text.slice(0, 80)}")`}`)];
  void opened;
  return { decoded, conventions, inferred: notes.inferred, ignored, pleaseCheck: [...sheet.remarks, ...notes.pleaseCheck, ...decoded.remarks] };
}

/** The decimal mark of the sheet: a comma where cells such as `52,1` outnumber cells such as `52.1`. */
function decimalMark(layout: Layout): '.' | ',' {
  let points = 0;
  let commas = 0;
  const { grid, body } = layout;
  for (let i = 0; i < Math.min(body.length, 200); i++) {
    for (let column = 0; column < Math.min(grid.columns, 200); column++) {
      const look = grid.look(body[i], column);
      if (look === cellLook.empty) continue;
      const text = grid.text(body[i], column);
      if (/^[<>]?\s*-?\d+,\d+$/.test(text) && !/^[<>]?\s*-?[1-9]\d{0,2},\d{3}$/.test(text)) commas++;
      else if (/^[<>]?\s*-?\d*\.\d+$/.test(text)) points++;
    }
  }
  return commas > points ? ',' : '.';
}

/** The columns in the order of the sheet, a completed FeOT in the place of the one that was there. */
function inPlace(columns: readonly Column[], order: readonly Column[]): Column[] {
  const bySymbol = new Map(columns.map((each) => [each.symbol, each]));
  const ordered = order.map(({ symbol }) => bySymbol.get(symbol)!);
  if (!order.some(({ symbol }) => symbol === 'FeOT')) ordered.push(bySymbol.get('FeOT')!);
  return ordered;
}

/** The grid type is kept inside the room. @internal */
export type { Grid };
