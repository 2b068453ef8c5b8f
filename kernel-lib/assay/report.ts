import { escapeSpreadsheet, writeWhole, type TableView } from '../display';
import type { TotalIronCounts } from '../recast';
import { csvText } from './csv-text';

/** What one source column became, and what its cells were. */
export interface ImportedColumn {
  /** The head as in the sheet. */
  readonly head: string;
  /** Sheet name ('' for a text file) and column letters (row number where samples stand in columns). */
  readonly sheet: string;
  readonly place: string;
  readonly became: 'analyte' | 'quantity' | 'label' | 'uncertainty' | 'cell states' | 'ignored';
  /** Symbol or label name in the suite; '' when ignored. */
  readonly name: string;
  /** Unit in the sheet as understood, and in the suite. */
  readonly sheetUnit: string;
  readonly unit: string;
  /** Factor from the sheet's number to the suite's. */
  readonly factor: number;
  readonly method: string;
  readonly measured: number;
  readonly below: number;
  readonly above: number;
  readonly missing: number;
  readonly unreadable: number;
  /** Addresses and texts of the first unreadable cells. */
  readonly unreadableCells: readonly { readonly address: string; readonly text: string; readonly why: string }[];
  readonly note: string;
}

/** What a sheet of the file holds. */
export interface SheetSummary {
  readonly name: string;
  readonly rows: number;
  readonly columns: number;
  readonly holds: string;
}

/** Everything an import decided, so that nothing changes silently. */
export interface ImportReport {
  readonly file: string;
  readonly sha256: string;
  readonly encoding: string;
  readonly delimiter: string;
  readonly decimal: '.' | ',';
  readonly sheets: readonly SheetSummary[];
  readonly sheetsRead: readonly string[];
  readonly samplesIn: 'rows' | 'columns';
  readonly rows: number;
  readonly columns: readonly ImportedColumn[];
  /** Row in the first sheet read (column, where samples stand in columns), counted from 1, of each of its samples. */
  readonly sheetRows: ArrayLike<number>;
  /** How the total iron of each row was found; undefined when the sheet has no iron. */
  readonly iron?: TotalIronCounts;
  /** What was concluded without the sheet saying so. */
  readonly inferred: readonly string[];
  /** Rows and columns that were left out, and why. */
  readonly ignored: readonly string[];
  /** What a person should look at before going on. Holds everything in `inferred` too. */
  readonly pleaseCheck: readonly string[];
}

export function reportView(report: ImportReport): TableView {
  const { iron } = report;
  const notes = [
    `${report.file}${report.sheetsRead.filter(Boolean).length > 0 ? `, sheet ${report.sheetsRead.join(' + ')}` : ''}: ${report.rows} samples, which stand in ${report.samplesIn}. SHA-256 ${report.sha256.slice(0, 12)}…`,
    ...(iron === undefined
      ? []
      : [
          `Total iron: ${iron.reportedTotal} rows as reported, ${iron.summed} FeO + Fe2O3 summed, ${iron.ferricAlone} Fe2O3 alone taken as total, ${iron.ferrousAlone} FeO alone taken as total, ${iron.none} without.`,
        ]),
    ...report.ignored.map((text) => `Left out: ${text}`),
    ...report.pleaseCheck.map((text) => `Please check: ${text}`),
  ];
  return {
    title: 'Import report',
    mostRows: Infinity,
    columns: ['column', 'head', 'became', 'name', 'unit', 'converted', 'measured', 'below', 'above', 'missing', 'unreadable', 'note'],
    rows: report.columns.map((each) => [
      each.sheet === '' ? each.place : `${each.sheet}!${each.place}`,
      each.head,
      each.became,
      each.name,
      each.unit,
      each.factor === 1 ? '' : `${each.sheetUnit} × ${each.factor}`,
      ...(each.became === 'analyte' || each.became === 'quantity'
        ? [each.measured, each.below, each.above, each.missing, each.unreadable]
        : [null, null, null, null, null]),
      [each.note, ...each.unreadableCells.slice(0, 5).map(({ address, text }) => `${address} "${text}"`)].filter(Boolean).join('; '),
    ]),
    notes,
  };
}

/**
 * Writes the import report as .csv beside the results: one row a source column, then what was inferred, left out and should be checked.
 *
 * @param report of `readAssays`
 * @param path of the .csv file; folders are made
 * @example writeImportReport(assays.report, 'results/import-report.csv')
 */
export function writeImportReport(report: ImportReport, path: string): void {
  if (!Array.isArray(report?.columns) || !Array.isArray(report?.pleaseCheck)) {
    throw new TypeError('writeImportReport: report must be the report of readAssays, as in (await readAssays(path)).report.');
  }
  const { columns, rows, notes = [] } = reportView(report);
  const line = (cells: readonly unknown[]) =>
    cells.map((cell) => csvText(escapeSpreadsheet(cell === null || cell === undefined ? '' : String(cell)))).join(',');
  writeWhole(path, `${[line(columns), ...rows.map(line), ...notes.map((note) => line([note]))].join('\n')}\n`);
}
