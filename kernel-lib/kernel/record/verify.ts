import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, dirname, join, resolve } from 'node:path';
import { showAs, type Showable, type TableCell } from '../../display';
import { noteInput } from '../../suite';
import { referenceFolder } from '../../tables';
import { parseNotebook, type Notebook } from '../notebook/document';
import { withParameters } from '../notebook/parameters';
import { runNotebook, type RunEvent } from '../notebook/run';
import { compareOutputs, type ValueDifference } from './compare-outputs';
import { changedLines, sheetChange } from './file-digests';
import { canonicalJson, sha256 } from './output-data';
import { contentDigests, readRecord, recordedCells, type RecordedInput, type RunRecord } from './run-record';

/** Something that is not as it was when the record was made. */
export interface Change {
  readonly what: 'input' | 'table' | 'notebook' | 'parameter' | 'version' | 'platform';
  /** In words, with the place: `oruvai-arc.xlsx, sheet Assays: row 12, column Ba (ppm)`. */
  readonly text: string;
}

/** What came of running a notebook again. */
export interface Verification extends Showable {
  /**
   * `identical`: every table and figure is the same to the byte; `same`: on another platform, the same to the precision compared;
   * `different`: some value differs; `not comparable`: the notebook could not be run as it was.
   */
  readonly verdict: 'identical' | 'same' | 'different' | 'not comparable';
  readonly changes: readonly Change[];
  readonly differences: readonly ValueDifference[];
  /** Values of tables and figures compared. */
  readonly values: number;
  /** Why it could not be compared; '' where it could. */
  readonly because: string;
}

/** Options of `verifyRun`. */
export interface VerifyOptions {
  /** Relative difference below which two numbers count as the same on another platform (default 1e-9). On the same one bytes are compared. */
  readonly tolerance?: number;
  /** Longest time for one cell in seconds. */
  readonly timeout?: number;
  readonly onProgress?: (event: RunEvent) => void;
  readonly signal?: AbortSignal;
}

/**
 * Runs a notebook again in a fresh process, as its record says, and compares every table and figure with the executed notebook. What the
 * notebook writes goes to a scratch folder that is removed; nothing beside the record changes.
 *
 * @param path of an executed notebook, with its `.record.json` beside it
 * @returns the verdict, what changed since (inputs by cell, tables by line, notebook by line, versions), which values differ and by how much
 * @throws RunRecordError when there is no usable record
 * @example (await ww.verifyRun('results/oruvai-arc/01-named-suite.ipynb')).verdict // 'identical'
 */
export async function verifyRun(path: string, options: VerifyOptions = {}): Promise<Verification> {
  if (typeof path !== 'string' || path === '') throw new TypeError('verifyRun takes the path of an executed notebook.');
  const { record, at } = readRecord(path);
  const home = dirname(at);
  const changes: Change[] = [];
  const stop = (because: string): Verification => verification({ verdict: 'not comparable', changes, differences: [], values: 0, because });

  const executedPath = resolve(home, record.executed);
  if (!existsSync(executedPath)) return stop(`the executed notebook ${record.executed} is not beside the record, so there is nothing to compare with`);
  const executed = parseNotebook(readFileSync(executedPath, 'utf8'), basename(executedPath));
  if (!matchesRecord(executed, record)) return stop(`${record.executed} is not the notebook that the record was made for: a cell or an output in it was changed by hand`);

  for (const input of record.inputs) {
    const change = await inputChange(input, home);
    if (change !== undefined) changes.push({ what: 'input', text: change });
  }
  changes.push(...tableChanges(record));

  const source = resolve(home, record.notebook.file);
  const missing = record.inputs.filter(({ file }) => !existsSync(resolve(home, file))).map(({ file }) => file);
  if (missing.length > 0) return stop(`${missing.join(', ')} ${missing.length === 1 ? 'is' : 'are'} missing; put the input back where the record says and verify again`);
  if (!existsSync(source)) return stop(`the notebook ${record.notebook.file} is missing`);
  changes.push(...notebookChanges(executed, source, record));

  const scratch = mkdtempSync(join(tmpdir(), 'verify-'));
  try {
    const { timeout, onProgress, signal } = options;
    const run = await runNotebook(source, { set: record.parameters, folder: resolve(home, record.notebook.folder), scratch, timeout, onProgress, signal, quiet: true, keepGoing: record.keepGoing });
    if (run.facts === undefined) return stop(`the notebook's process ended before its last cell: ${run.failures[0]?.evalue ?? run.status}`);
    changes.push(...versionChanges(record.environment, run.facts.versions));
    const samePlatform = !changes.some(({ what }) => what === 'platform');
    const { identical, differences, values } = compareOutputs(executed, run.notebook, samePlatform ? 0 : (options.tolerance ?? 1e-9));
    const verdict = identical ? 'identical' : differences.length === 0 ? 'same' : 'different';
    return verification({ verdict, changes, differences, values, because: '' });
  } finally {
    rmSync(scratch, { recursive: true, force: true });
  }
}

const matchesRecord = (executed: Notebook, record: RunRecord): boolean => canonicalJson(recordedCells(executed)) === canonicalJson(record.cells);

async function inputChange(input: RecordedInput, home: string): Promise<string | undefined> {
  const path = resolve(home, input.file);
  if (!existsSync(path)) return `${input.file} is missing`;
  const content = readFileSync(path);
  if (noteInput(path, content).sha256 === input.sha256) return undefined;
  const now = await contentDigests(path);
  const sheets = (input.sheets ?? []).flatMap((before) => {
    const after = now.sheets?.find(({ sheet }) => sheet === before.sheet);
    return after === undefined ? [`sheet ${before.sheet} is gone`] : [sheetChange(before, after)].filter((text) => text !== '');
  });
  if (sheets.length > 0) return `${input.file}, ${sheets.join('; ')}`;
  if (input.lines !== undefined && now.lines !== undefined) return `${input.file}, line ${changedLines(input.lines, path).join(', ')}`;
  return `${input.file} changed, but none of its cells did`;
}

function tableChanges(record: RunRecord): Change[] {
  return record.tables.flatMap(({ table, sha256: before, lines }) => {
    const path = join(referenceFolder(), table);
    if (!existsSync(path)) return lines === '' ? [] : [{ what: 'table' as const, text: `reference-tables/${table} is gone` }];
    if (sha256(readFileSync(path, 'utf8').replaceAll('\r\n', '\n')) === before) return [];
    const changed = changedLines(lines, path);
    return [{ what: 'table' as const, text: `reference-tables/${table}${changed.length === 0 ? ': lines were added at its end' : `, line ${changed.slice(0, 12).join(', ')}${changed.length > 12 ? ' …' : ''}`}` }];
  });
}

/** Cells whose text is not what it was when the notebook was run, with the first line that changed. */
function notebookChanges(executed: Notebook, source: string, record: RunRecord): Change[] {
  const current = withParameters(parseNotebook(readFileSync(source, 'utf8'), basename(source)), record.parameters);
  const now = new Map(current.cells.map((cell) => [cell.id, cell]));
  const changes: Change[] = [];
  const code = executed.cells.filter((cell) => cell.type === 'code' && cell.source.trim() !== '');
  code.forEach((cell, i) => {
    const after = now.get(cell.id);
    now.delete(cell.id);
    if (after === undefined) changes.push({ what: 'notebook', text: `code cell ${i + 1} (${cell.id}) is gone from ${record.notebook.file}` });
    else if (after.source !== cell.source) {
      const [before, later] = [cell.source.split('\n'), after.source.split('\n')];
      const line = before.findIndex((text, k) => text !== later[k]);
      const k = line < 0 ? before.length : line;
      changes.push({ what: 'notebook', text: `code cell ${i + 1} (${cell.id}), line ${k + 1}: "${before[k] ?? ''}" is now "${later[k] ?? ''}"` });
    }
  });
  for (const cell of now.values()) {
    if (cell.type === 'code' && cell.source.trim() !== '') changes.push({ what: 'notebook', text: `a code cell (${cell.id}) is new in ${record.notebook.file}` });
  }
  return changes;
}

function versionChanges(before: RunRecord['environment'], after: RunRecord['environment']): Change[] {
  const changes: Change[] = [];
  const compare = (what: Change['what'], name: string, old: string | undefined, now: string | undefined) => {
    if (old !== now) changes.push({ what, text: `${name} ${now ?? 'is gone'}${now === undefined || old === undefined ? '' : `, where it was ${old}`}` });
  };
  compare('platform', 'platform', before.platform, after.platform);
  compare('version', 'wedgework', before.wedgework, after.wedgework);
  compare('version', 'Node.js', before.node, after.node);
  for (const name of new Set([...Object.keys(before.packages), ...Object.keys(after.packages)])) compare('version', name, before.packages[name], after.packages[name]);
  return changes;
}

function verification(result: Pick<Verification, 'verdict' | 'changes' | 'differences' | 'values' | 'because'>): Verification {
  return showAs(result, ({ verdict, changes, differences, values, because }) => ({
    title: because === '' ? `Run again: ${verdict} (${values} values of tables and figures compared)` : `Not comparable: ${because}.`,
    columns: ['', 'where', 'was', 'is now', 'apart by'],
    rows: [
      ...changes.map(({ what, text }): TableCell[] => [`${what} changed`, text]),
      ...differences.slice(0, 40).map((each): TableCell[] => [
        `cell ${each.cell}, ${each.kind} ${each.output}`,
        each.place,
        each.before.slice(0, 80),
        each.after.slice(0, 80),
        each.relative === undefined ? '' : `${Number((each.relative * 100).toPrecision(3))} %`,
      ]),
    ],
    totalRows: changes.length + differences.length,
  }));
}
