import { existsSync, readFileSync, statSync } from 'node:fs';
import { basename, dirname, resolve } from 'node:path';
import { writeWhole } from '../../display';
import { EngineGone, EngineProcess } from '../engine/engine-process';
import type { CellReply } from '../engine/messages';
import type { CellOutput, ErrorOutput } from '../output';
import { progressType } from '../progress';
import type { RunFacts } from '../record/run-facts';
import { formatRecord, makeRecord, recordPath } from '../record/run-record';
import { closingBlocks } from '../report/closing';
import { notebookBlocks } from '../report/notebook-blocks';
import { reportPage } from '../report/page';
import { reportPdf } from '../report/pdf';
import { summaryType } from '../run-summary';
import { OutputStore } from './cell-outputs';
import { formatNotebook, NotebookFormatError, parseNotebook, type Notebook, type NotebookCell } from './document';
import { notebookHtml } from './html';
import { withParameters, type ParameterValue } from './parameters';

/** What a run tells while it goes on. */
export type RunEvent =
  | { readonly kind: 'cell'; readonly cell: number; readonly of: number; readonly heading: string }
  | { readonly kind: 'task'; readonly text: string; readonly done: boolean }
  | { readonly kind: 'stream'; readonly name: 'stdout' | 'stderr'; readonly text: string };

/** Options of `runNotebook`. */
export interface RunOptions {
  /** Values for names that the cell tagged `parameters` declares. */
  readonly set?: Readonly<Record<string, ParameterValue>>;
  /** Where the executed notebook goes; not written without it. */
  readonly out?: string;
  /** Where the notebook as one HTML page goes; not written without it. */
  readonly html?: string;
  /** Longest time for one cell in seconds (default: no limit). */
  readonly timeout?: number;
  /** Run on after a cell that failed (default false). */
  readonly keepGoing?: boolean;
  /** Folder that the cells run in (default: the notebook's own). */
  readonly folder?: string;
  /** Where a report goes (.html or .pdf, or a list of both): texts, figures and tables without code, with cautions, methods, sources and lineage. */
  readonly report?: string | readonly string[];
  /** Whether a record of the run is written beside the executed notebook (default true where `out` is given). */
  readonly record?: boolean;
  /** Folder that takes every file the cells write through the library, instead of where they ask: for a trial run. */
  readonly scratch?: string;
  /** No progress lines (default false). */
  readonly quiet?: boolean;
  readonly onProgress?: (event: RunEvent) => void;
  /** Stops the run; the cells done so far are still written. */
  readonly signal?: AbortSignal;
}

/** Where and how a run failed. */
export interface RunFailure {
  /** Number of the code cell, from 1, and its id. */
  readonly cell: number;
  readonly id: string;
  readonly ename: string;
  readonly evalue: string;
  readonly traceback: readonly string[];
}

/** What came of a run. */
export interface NotebookRun {
  readonly status: 'ok' | 'failed' | 'timed out' | 'stopped';
  /** The executed notebook. */
  readonly notebook: Notebook;
  readonly failures: readonly RunFailure[];
  /** Code cells run, and code cells in all. */
  readonly cellsRun: number;
  readonly cellsInAll: number;
  /** Labelled lines that the notebook gave through `runSummary`, in order. */
  readonly summary: readonly (readonly [label: string, value: string | number])[];
  readonly seconds: number;
  /** What the process of the run read and what ran it; undefined when the process ended early. */
  readonly facts?: RunFacts;
  /** Files written. */
  readonly written: readonly string[];
}

/** How long a cell past its time gets to end by itself before its process is ended, in milliseconds. */
const grace = 3_000;

/**
 * Runs a notebook from top to bottom in a process of its own, without Python or a Jupyter server, and writes the executed notebook
 * (format 4.5) and a self-contained HTML page where asked.
 *
 * @param path the notebook file
 * @param options see RunOptions
 * @returns the executed notebook, failures, the summary lines, files written; a failing cell is no exception
 * @throws NotebookFormatError for a file that is no notebook; RangeError for unknown parameters or a bad timeout; Error when it cannot be read
 * @example const run = await ww.runNotebook('analysis.ipynb', { set: { sheet: 'my-island.xlsx' }, html: 'results/analysis.html' })
 */
export async function runNotebook(path: string, options: RunOptions = {}): Promise<NotebookRun> {
  const { timeout, signal, onProgress } = options;
  if (typeof path !== 'string' || path === '') throw new TypeError('runNotebook takes the path of a notebook file.');
  if (timeout !== undefined && !(timeout > 0)) throw new RangeError(`runNotebook: timeout is a number of seconds above 0, not ${String(timeout)}.`);
  const start = performance.now();
  const file = resolve(path);
  if (!existsSync(file) || !statSync(file).isFile()) throw new NotebookFormatError(`There is no notebook ${path}. Give the path of an .ipynb file.`);
  const folder = resolve(options.folder ?? dirname(file));
  if (!existsSync(folder)) throw new RangeError(`runNotebook: the folder ${folder} does not exist.`);
  const notebook = withParameters(parseNotebook(readFileSync(file, 'utf8'), basename(file)), options.set ?? {});

  const code = notebook.cells.filter((cell) => cell.type === 'code' && cell.source.trim() !== '');
  const store = new OutputStore();
  const counts = new Map<string, number>();
  const failures: RunFailure[] = [];
  let summary: NotebookRun['summary'] = [];
  let status: NotebookRun['status'] = 'ok';
  let facts: RunFacts | undefined;

  const engine = new EngineProcess({ folder, preload: true, quiet: options.quiet ?? false, scratch: options.scratch });
  const stop = () => engine.interrupt();
  const stopped = () => signal?.aborted === true;
  signal?.addEventListener('abort', stop);
  try {
    const { warning } = await engine.ready;
    if (warning !== undefined) onProgress?.({ kind: 'stream', name: 'stderr', text: `${warning}\n` });
    for (const [i, cell] of code.entries()) {
      if (stopped()) {
        status = 'stopped';
        break;
      }
      const count = i + 1;
      onProgress?.({ kind: 'cell', cell: count, of: code.length, heading: headingBefore(notebook, cell) });
      counts.set(cell.id, count);
      const take = (output: CellOutput) => {
        store.add(cell.id, output, count);
        if (output.kind === 'stream') onProgress?.(output);
        if (!('data' in output)) return;
        const task = output.data[progressType] as { text: string; done: number; total: number } | undefined;
        if (task !== undefined) onProgress?.({ kind: 'task', text: task.text, done: task.done >= task.total });
        const lines = (output.data[summaryType] as { lines: [string, string | number][] } | undefined)?.lines;
        if (lines !== undefined) summary = [...summary, ...lines];
      };
      const { reply, timedOut } = await runCell(engine, cell.source, `cell [${count}]`, take, timeout);
      if (reply.status === 'ok') continue;
      const { ename = 'Error', evalue = '', traceback = [] } = reply;
      failures.push({ cell: count, id: cell.id, ename, evalue, traceback });
      if (stopped()) status = 'stopped';
      else status = timedOut ? 'timed out' : 'failed';
      if (status !== 'failed' || options.keepGoing !== true || ename === 'KernelEnded') break;
    }
    if (failures.at(-1)?.ename !== 'KernelEnded' && status !== 'timed out') facts = await engine.facts();
  } finally {
    signal?.removeEventListener('abort', stop);
    await engine.end();
  }

  const executed: Notebook = {
    metadata: executedMetadata(notebook),
    cells: notebook.cells.map((cell) => (cell.type === 'code' ? { ...cell, outputs: store.outputs(cell.id), executionCount: counts.get(cell.id) ?? null } : cell)),
  };
  const written: string[] = [];
  if (options.out !== undefined) {
    writeWhole(resolve(options.out), formatNotebook(executed));
    written.push(resolve(options.out));
  }
  if (options.html !== undefined) {
    writeWhole(resolve(options.html), notebookHtml(executed, { title: basename(file, '.ipynb') }));
    written.push(resolve(options.html));
  }
  if (options.out !== undefined && options.record !== false && facts !== undefined) {
    const out = resolve(options.out);
    const record = await makeRecord({ source: file, folder, executed: out, parameters: options.set ?? {}, keepGoing: options.keepGoing === true, status, notebook: executed, facts });
    writeWhole(recordPath(out), formatRecord(record));
    written.push(recordPath(out));
  }
  for (const to of [options.report ?? []].flat()) {
    const { title, blocks } = notebookBlocks(executed);
    const whole = [...blocks, ...closingBlocks(facts?.lineage ?? [], { facts })];
    writeWhole(resolve(to), to.endsWith('.pdf') ? await reportPdf(title, whole) : reportPage(title, whole));
    written.push(resolve(to));
  }
  return { status, notebook: executed, failures, cellsRun: counts.size, cellsInAll: code.length, summary, facts, seconds: (performance.now() - start) / 1000, written };
}

/** Runs one cell, but not for ever. The engine's end is an error of the cell like any other. */
async function runCell(
  engine: EngineProcess,
  code: string,
  label: string,
  take: (output: CellOutput) => void,
  timeout: number | undefined,
): Promise<{ reply: CellReply; timedOut: boolean }> {
  let timedOut = false;
  let last: NodeJS.Timeout | undefined;
  const first = timeout === undefined ? undefined : setTimeout(() => {
    timedOut = true;
    engine.interrupt();
    last = setTimeout(() => void engine.end(), grace);
  }, timeout * 1000);
  const fail = (ename: string, evalue: string): CellReply => {
    const error: ErrorOutput = { kind: 'error', ename, evalue, traceback: [`\u001b[31m${ename}\u001b[39m: ${evalue}`, `  ${label}`] };
    take(error);
    return { status: 'error', ename, evalue, traceback: error.traceback };
  };
  const tooLong = () => fail('CellTimeout', `The cell ran longer than its ${timeout} s. Give it more time with --timeout, or less to do.`);
  try {
    const held: CellOutput[] = [];
    // The interrupt's own error would only repeat what the timeout says.
    const reply = await engine.execute({ code, label }, (output) => (timedOut && output.kind === 'error' ? held.push(output) : take(output)));
    return { reply: timedOut && reply.status === 'error' ? tooLong() : reply, timedOut: timedOut && reply.status === 'error' };
  } catch (error) {
    if (!(error instanceof EngineGone)) throw error;
    return { reply: timedOut ? tooLong() : fail('KernelEnded', error.message), timedOut };
  } finally {
    clearTimeout(first);
    clearTimeout(last);
  }
}

/** The nearest heading above a cell: what a reader calls the part of the notebook that runs. */
function headingBefore(notebook: Notebook, cell: NotebookCell): string {
  for (let i = notebook.cells.indexOf(cell); i >= 0; i--) {
    const match = notebook.cells[i].type === 'markdown' ? /^#{1,6}\s+(.+)$/m.exec(notebook.cells[i].source) : null;
    if (match !== null) return match[1].replace(/[*_`]/g, '').trim();
  }
  return '';
}

function executedMetadata(notebook: Notebook): Notebook['metadata'] {
  return {
    kernelspec: { display_name: 'wedgework (TypeScript)', language: 'typescript', name: 'wedgework' },
    ...notebook.metadata,
    language_info: { file_extension: '.ts', mimetype: 'text/typescript', name: 'typescript' },
  };
}
