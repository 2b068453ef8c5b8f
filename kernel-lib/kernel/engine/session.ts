import type { CellOutput, ErrorOutput } from '../output';
import { richValues } from '../rich-value';
import { openSessionLink } from '../session-link';
import { callBefore } from './call-before';
import { compilerError, scriptName, thrownError, type CompiledCell } from './cell-error';
import type { InterruptWords } from './interrupt-words';
import type { CellReply, CompleteReply, InspectReply, IsCompleteReply } from './messages';
import { StreamGate } from './stream-gate';
import { connectTslabDisplay, openExecutor, type CompilerFault } from './tslab-contract';

/** Compiled cells kept for the tracebacks of later cells. */
const cellsKept = 400;
/** Most things that one cell may show; a loop that shows for ever must not fill the notebook. */
const mostDisplays = 300;

export interface SessionOptions {
  readonly folder: string;
  readonly quiet: boolean;
  readonly words: InterruptWords;
  /** Resolves modules as the library's own files do. */
  readonly libraryRequire: NodeJS.Require;
}

type Send = (output: CellOutput) => void;

/** Marks an error that says the cell was stopped from outside. */
const interruptedError: ErrorOutput = {
  kind: 'error',
  ename: 'Interrupted',
  evalue: 'The cell was stopped. Variables of the cells before it are kept.',
  traceback: ['\u001b[31mInterrupted\u001b[39m: the cell was stopped. Variables of the cells before it are kept.'],
};

/** Thrown in place of running a cell whose interrupt came before it was compiled. */
class CancelledCell extends Error {}

const isBroken = (error: unknown): boolean => error instanceof CancelledCell || (error as NodeJS.ErrnoException | null)?.code === 'ERR_SCRIPT_EXECUTION_INTERRUPTED';

interface RunningCell {
  readonly number: number;
  readonly code: string;
  readonly label: string;
  readonly faults: CompilerFault[];
  readonly thrown: unknown[];
  value: unknown;
}

/**
 * The state of one notebook: runs its cells one after the other and sends what they print, show and throw. There can be only one in a
 * process.
 */
export class Session {
  private readonly executor;
  private readonly cells = new Map<number, CompiledCell>();
  private readonly gate = new StreamGate((name, text) => this.send({ kind: 'stream', name, text }));
  private send: Send = () => {};
  private displays = 0;
  private runs = 0;
  private running: RunningCell | undefined;
  private abort = new AbortController();
  private stop: (() => void) | undefined;

  private readonly words: InterruptWords;

  constructor(options: SessionOptions) {
    this.words = options.words;
    Error.stackTraceLimit = 60;
    this.executor = openExecutor(options.folder, options.libraryRequire, {
      compiled: (output) => {
        if (this.running === undefined) return undefined;
        const number = this.runs;
        this.cells.set(number, { label: this.running.label, source: this.running.code, output });
        this.cells.delete(number - cellsKept);
        if (this.words.wanted === this.running.number) throw new CancelledCell();
        this.words.running = this.running.number;
        return { scriptName: scriptName(number) };
      },
      value: (value) => {
        if (this.running !== undefined) this.running.value = value;
      },
      diagnostic: (fault) => this.running?.faults.push(fault),
      thrown: (error) => this.running?.thrown.push(error),
    });
    connectTslabDisplay(({ data, metadata, transient }, update) =>
      this.show({ kind: update === true ? 'update' : 'display', data, metadata, displayId: transient?.display_id }),
    );
    openSessionLink({ show: (output) => this.show(output), signal: () => this.abort.signal, quiet: options.quiet });
  }

  /** What code of a cell prints, also after the cell ended: it then goes to the latest cell. */
  print(name: 'stdout' | 'stderr', chunk: string | Uint8Array): void {
    this.gate.write(name, chunk);
  }

  /** Loads the library as `ww`, out of sight. @returns what went wrong, if anything did */
  async preload(): Promise<string | undefined> {
    const reply = await this.run("import * as ww from 'wedgework';", 'preload', () => {}, -1);
    return reply.status === 'ok' ? undefined : `The library could not be loaded as ww: ${reply.evalue}`;
  }

  /** Runs a cell. @param number by which an interrupt means this cell; each cell has another */
  async run(code: string, label: string, send: Send, number: number): Promise<CellReply> {
    this.gate.end();
    this.send = send;
    this.displays = 0;
    this.runs++;
    this.abort = new AbortController();
    const running: RunningCell = (this.running = { number, code, label, faults: [], thrown: [], value: undefined });
    const stopped = new Promise<'stopped'>((resolve) => (this.stop = () => resolve('stopped')));
    let failure: ErrorOutput | undefined;
    try {
      const outcome = await Promise.race([this.attempt(running), stopped]);
      failure = outcome === 'stopped' ? interruptedError : outcome;
    } finally {
      this.stop = undefined;
      this.running = undefined;
      this.words.running = 0;
    }
    this.gate.end();
    if (this.displays > mostDisplays) {
      send({ kind: 'stream', name: 'stderr', text: `\nOutput cut: this cell showed ${this.displays} things; the first ${mostDisplays} are kept.\n` });
    }
    if (failure === undefined) return { status: 'ok' };
    send(failure);
    const { ename, evalue, traceback } = failure;
    return { status: 'error', ename, evalue, traceback, ...(failure === interruptedError && { interrupted: true }) };
  }

  /** Runs the cell and shows its value. @returns what went wrong */
  private async attempt(running: RunningCell): Promise<ErrorOutput | undefined> {
    const signal = this.abort.signal;
    try {
      const finished = await this.executor.execute(running.code);
      if (signal.aborted) return interruptedError;
      if (running.faults.length > 0) return compilerError(running.label, running.code, running.faults);
      if (!finished || running.thrown.length > 0) return this.explain(running.thrown[0]);
      const values = await richValues(running.value);
      if (signal.aborted) return interruptedError;
      for (const { data, metadata } of values) this.show({ kind: values.length === 1 ? 'result' : 'display', data, metadata });
      return undefined;
    } catch (error) {
      return signal.aborted ? interruptedError : this.explain(error);
    }
  }

  private explain(error: unknown): ErrorOutput {
    return isBroken(error) ? interruptedError : thrownError(error, this.cells);
  }

  private show(output: CellOutput & { kind: 'result' | 'display' | 'update' }): void {
    this.gate.flush();
    if (output.kind !== 'update' && ++this.displays > mostDisplays) return;
    this.send(output);
  }

  /** Stops a cell if it is the running one: code that waits is left, code that watches the signal ends. */
  interrupt(number: number): void {
    if (this.stop === undefined || this.running?.number !== number) return;
    this.abort.abort(new Error('The cell was interrupted.'));
    this.executor.interrupt();
    this.stop();
  }

  /** An error that no cell waits for, such as one thrown in a timer. */
  report(error: unknown): void {
    const { traceback } = thrownError(error, this.cells);
    this.print('stderr', `Error outside a cell's own run:\n${traceback.join('\n')}\n`);
  }

  complete(code: string, cursor: number): CompleteReply {
    return this.executor.complete(code, cursor);
  }

  inspect(code: string, cursor: number): InspectReply {
    const found = this.executor.inspect(code, cursor);
    if (found !== undefined) return { found };
    // Inside the brackets of a call the question is about the function.
    const call = callBefore(code, cursor);
    return { found: (call === undefined ? undefined : this.executor.inspect(code, call)) ?? null };
  }

  isComplete(code: string): IsCompleteReply {
    return this.executor.isComplete(code);
  }
}
