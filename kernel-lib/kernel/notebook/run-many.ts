import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { basename, dirname, extname, join, relative, resolve } from 'node:path';
import Papa from 'papaparse';
import { escapeSpreadsheet, showAs, writeWhole, type Showable, type TableCell } from '../../display';
import { libraryVersion } from '../../suite';
import { referenceFolder } from '../../tables';
import { sha256 } from '../record/output-data';
import { readRecord, recordPath } from '../record/run-record';
import { summaryType } from '../run-summary';
import { NotebookFormatError, parseNotebook, type Notebook } from './document';
import { parameterNames, withParameters, type ParameterValue } from './parameters';
import { runNotebook, type NotebookRun } from './run';

/** Options of `runOverSheets`. */
export interface ManyOptions {
  /** Folder for the results: one folder a sheet, and `summary.csv`. */
  readonly out: string;
  /** The notebook's parameter that takes the sheet (default `sheet`). A parameter `results` is given the sheet's own folder. */
  readonly parameter?: string;
  /** Further values for parameters, the same for every sheet. */
  readonly set?: Readonly<Record<string, ParameterValue>>;
  /** How many runs go at once (default: as many as the machine has processors). */
  readonly jobs?: number;
  /** Run every sheet, also those whose results are finished and current (default false). */
  readonly again?: boolean;
  readonly html?: boolean;
  readonly report?: boolean;
  /** Longest time for one cell in seconds. */
  readonly timeout?: number;
  readonly onProgress?: (sheet: SheetRun, done: number, of: number) => void;
  /** Stops what is running and starts no more; finished results stay. */
  readonly signal?: AbortSignal;
}

/** What came of one sheet. */
export interface SheetRun {
  readonly sheet: string;
  /** `ok`; `kept`: finished before and nothing has changed since; otherwise how the run ended. */
  readonly status: 'kept' | NotebookRun['status'];
  readonly seconds: number;
  /** The first failure in words; '' where there is none. */
  readonly failure: string;
  /** Labelled lines that the notebook gave. */
  readonly summary: readonly (readonly [string, string | number])[];
}

/** What came of all sheets, in order of their names. */
export interface ManyRuns extends Showable {
  readonly runs: readonly SheetRun[];
  readonly out: string;
}

const sheetEndings = new Set(['.csv', '.tsv', '.xlsx', '.xls', '.ods']);

/**
 * Runs one notebook over every sheet of a folder, several at once, each in a process of its own. A sheet that fails is listed and stops no
 * other. Results that are finished are kept as long as sheet, notebook, parameters, tables and library are the same.
 *
 * @param notebook path of the notebook, with a cell tagged `parameters` that declares the sheet
 * @param folder with the sheets (.csv, .tsv, .xlsx, .xls, .ods)
 * @param options see ManyOptions
 * @returns a row a sheet; also written as `summary.csv`
 * @throws NotebookFormatError for a file that is no notebook; RangeError for a folder without sheets, or a parameter the notebook lacks
 * @example const all = await ww.runOverSheets('analysis.ipynb', 'sheets', { out: 'results/all' })
 */
export async function runOverSheets(notebook: string, folder: string, options: ManyOptions): Promise<ManyRuns> {
  const { parameter = 'sheet', jobs = availableParallelism(), signal } = options;
  if (typeof options.out !== 'string' || options.out === '') throw new TypeError('runOverSheets: out must name the folder for the results.');
  if (!Number.isInteger(jobs) || jobs < 1) throw new RangeError(`runOverSheets: jobs must be a whole number from 1, not ${String(jobs)}.`);
  const file = resolve(notebook);
  if (!existsSync(file)) throw new NotebookFormatError(`There is no notebook ${notebook}. Give the path of an .ipynb file.`);
  const parsed = parseNotebook(readFileSync(file, 'utf8'), basename(file));
  const names = parameterNames(parsed);
  if (!names.includes(parameter)) throw new RangeError(`${basename(file)} has no parameter "${parameter}" to take the sheet. It has: ${names.join(', ') || 'none'}.`);
  if (!existsSync(folder) || !statSync(folder).isDirectory()) throw new RangeError(`There is no folder ${folder}.`);
  const sheets = readdirSync(folder).filter((name) => sheetEndings.has(extname(name).toLowerCase()) && !name.startsWith('.') && !name.startsWith('~$')).sort();
  if (sheets.length === 0) throw new RangeError(`${folder} holds no sheets (${[...sheetEndings].join(', ')}).`);

  const results: SheetRun[] = new Array<SheetRun>(sheets.length);
  let next = 0;
  let done = 0;
  const worker = async () => {
    while (next < sheets.length && signal?.aborted !== true) {
      const i = next++;
      results[i] = await runSheet(sheets[i], i);
      options.onProgress?.(results[i], ++done, sheets.length);
    }
  };
  const runSheet = async (sheet: string, i: number): Promise<SheetRun> => {
    // Two sheets that differ only in their ending keep folders of their own.
    const stem = basename(sheet, extname(sheet));
    const twin = sheets.some((other, k) => k !== i && basename(other, extname(other)) === stem);
    const home = join(resolve(options.out), twin ? sheet.replaceAll('.', '-') : stem);
    const out = join(home, basename(file));
    const slashes = (path: string) => path.replaceAll('\\', '/');
    const set = {
      ...options.set,
      [parameter]: slashes(relative(dirname(file), resolve(folder, sheet))),
      ...(names.includes('results') ? { results: slashes(relative(dirname(file), home)) } : {}),
    };
    if (options.again !== true && isCurrent(parsed, set, out)) return { sheet, status: 'kept', seconds: 0, failure: '', summary: keptSummary(out) };
    const bare = out.replace(/\.ipynb$/, '');
    const start = performance.now();
    try {
      const run = await runNotebook(file, {
        set, out, signal, timeout: options.timeout, quiet: true,
        html: options.html === true ? `${bare}.html` : undefined,
        report: options.report === true ? [`${bare}.report.html`, `${bare}.report.pdf`] : undefined,
      });
      const [first] = run.failures;
      const failure = first === undefined ? '' : `code cell ${first.cell}: ${first.ename}: ${first.evalue}`;
      return { sheet, status: run.status, seconds: run.seconds, failure, summary: run.summary };
    } catch (error) {
      return { sheet, status: 'failed', seconds: (performance.now() - start) / 1000, failure: (error as Error).message, summary: [] };
    }
  };
  await Promise.all(Array.from({ length: Math.min(jobs, sheets.length) }, worker));
  for (const [i, sheet] of sheets.entries()) results[i] ??= { sheet, status: 'stopped', seconds: 0, failure: 'not begun', summary: [] };
  writeWhole(join(resolve(options.out), 'summary.csv'), summaryCsv(results));
  return showAs({ runs: results, out: options.out }, ({ runs }) => {
    const labels = summaryLabels(runs);
    const failed = runs.filter(({ status }) => status !== 'ok' && status !== 'kept').length;
    return {
      title: `${runs.length} sheets: ${runs.length - failed} finished, ${failed} not`,
      columns: ['sheet', 'status', ...labels, 'failure'],
      rows: runs.map((run): TableCell[] => [run.sheet, run.status, ...labels.map((label) => run.summary.find(([name]) => name === label)?.[1]), run.failure]),
    };
  });
}

const summaryLabels = (runs: readonly SheetRun[]): string[] => [...new Set(runs.flatMap(({ summary }) => summary.map(([label]) => label)))];

function summaryCsv(runs: readonly SheetRun[]): string {
  const labels = summaryLabels(runs);
  const inert = (value: string | number | undefined) => (typeof value === 'string' ? escapeSpreadsheet(value) : (value ?? ''));
  const rows = runs.map((run) => [run.sheet, run.status, ...labels.map((label) => run.summary.find(([name]) => name === label)?.[1]), run.failure].map(inert));
  return `${Papa.unparse([['sheet', 'status', ...labels, 'failure'].map(inert), ...rows], { newline: '\n' })}\n`;
}

/** Whether a finished run's record still holds: same cells and parameters, same inputs, same tables, same library. */
function isCurrent(notebook: Notebook, set: Readonly<Record<string, ParameterValue>>, out: string): boolean {
  if (!existsSync(recordPath(out)) || !existsSync(out)) return false;
  try {
    const { record } = readRecord(out);
    if (record.status !== 'ok' || record.environment.wedgework !== libraryVersion()) return false;
    const cells = withParameters(notebook, set).cells.filter((cell) => cell.type === 'code' && cell.source.trim() !== '');
    if (cells.length !== record.cells.length || cells.some((cell, i) => sha256(cell.source) !== record.cells[i].source)) return false;
    const same = (path: string, hash: string) => existsSync(path) && sha256(readFileSync(path)) === hash;
    if (!record.inputs.every(({ file, sha256: hash }) => same(resolve(dirname(out), file), hash))) return false;
    return record.tables.every(({ table, sha256: hash }) => {
      const path = join(referenceFolder(), table);
      return !existsSync(path) || sha256(readFileSync(path, 'utf8').replaceAll('\r\n', '\n')) === hash;
    });
  } catch {
    // A record that cannot be read is no reason to keep old results.
    return false;
  }
}

/** The summary lines of an executed notebook. */
function keptSummary(out: string): SheetRun['summary'] {
  const { cells } = parseNotebook(readFileSync(out, 'utf8'), basename(out));
  return cells.flatMap(({ outputs }) =>
    outputs.flatMap((output) => ((output.data as Record<string, { lines?: [string, string | number][] }> | undefined)?.[summaryType]?.lines ?? [])),
  );
}
