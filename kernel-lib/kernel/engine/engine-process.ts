import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import type { Writable } from 'node:stream';
import type { CellOutput } from '../output';
import type { RunFacts } from '../record/run-facts';
import type { CellReply, CompleteReply, EngineOptions, EngineReport, EngineRequest, InspectReply, IsCompleteReply } from './messages';

type Ask<Kind extends EngineRequest['ask']> = Omit<Extract<EngineRequest, { ask: Kind }>, 'id' | 'ask'>;

/** The engine's process ended while something was asked of it. */
export class EngineGone extends Error {
  override readonly name = 'EngineGone';
}

/**
 * A running engine, seen from the process that started it: one notebook's cells run in a process of their own, so that an endless loop,
 * a crash or the end of the notebook touches nothing else. The engine ends with the process that started it, however that ends.
 */
export class EngineProcess {
  /** Resolves when cells can run. Rejects with EngineGone when the engine cannot start. */
  readonly ready: Promise<{ readonly compiler: string; readonly warning?: string }>;
  /** Resolves when the process has ended. */
  readonly ended: Promise<{ readonly code: number | null; readonly signal: NodeJS.Signals | null }>;
  private readonly child: ChildProcess;
  private readonly waiting = new Map<number, { resolve: (answer: never) => void; reject: (error: Error) => void; output?: (output: CellOutput) => void }>();
  /** Cells not answered yet, in the order they came: the first is the one that runs. */
  private readonly cells = new Set<number>();
  private last = 0;
  private latestOutput: ((output: CellOutput) => void) | undefined;
  private said = '';

  constructor(options: EngineOptions) {
    const script = join(__dirname, 'main.js');
    if (!existsSync(script)) throw new Error('The library is not built. Run "npm run build" in the repository, then try again.');
    // An interrupt may terminate code in the middle of a callback; Node's own check of its async bookkeeping would then end the process.
    this.child = spawn(process.execPath, ['--no-force-async-hooks-checks', script, JSON.stringify(options)], {
      stdio: ['ignore', 'pipe', 'pipe', 'ipc', 'pipe'],
      // Of its own process group: an interrupt key in the terminal reaches this process alone, which then asks the engine.
      detached: process.platform !== 'win32',
      windowsHide: true,
    });
    this.ended = new Promise((resolve) => {
      this.child.once('exit', (code, signal) => resolve({ code, signal }));
      this.child.once('error', () => resolve({ code: null, signal: null }));
    });
    let started: (report: { compiler: string; warning?: string }) => void;
    let failed: (error: Error) => void;
    this.ready = new Promise((resolve, reject) => ((started = resolve), (failed = reject)));
    this.ready.catch(() => {});
    this.child.on('message', (report: EngineReport) => {
      if (report.tell === 'ready') started(report);
      else if (report.tell === 'failed') {
        this.waiting.get(report.id)?.reject(new Error(report.message));
        this.waiting.delete(report.id);
      } else if (report.tell === 'output') (this.waiting.get(report.id)?.output ?? this.latestOutput)?.(report.output);
      else {
        this.waiting.get(report.id)?.resolve(report.answer as never);
        this.waiting.delete(report.id);
      }
    });
    // What bypasses the engine's own streams: programs started by a cell, or Node's last words.
    for (const name of ['stdout', 'stderr'] as const) {
      this.child[name]!.setEncoding('utf8').on('data', (text: string) => {
        this.said = (this.said + text).slice(-2_000);
        this.latestOutput?.({ kind: 'stream', name, text });
      });
    }
    this.lifeline.on('error', () => {});
    void this.ended.then(({ code, signal }) => {
      const how = signal === null ? `exit status ${code}` : `signal ${signal}`;
      const gone = new EngineGone(`The notebook's process ended (${how}).${this.said === '' ? '' : ` Its last words: ${this.said.trim()}`}`);
      failed(gone);
      for (const { reject } of this.waiting.values()) reject(gone);
      this.waiting.clear();
    });
  }

  get pid(): number | undefined {
    return this.child.pid;
  }

  private get lifeline(): Writable {
    return this.child.stdio[4] as Writable;
  }

  private ask<Answer>(request: EngineRequest, output?: (output: CellOutput) => void): Promise<Answer> {
    return new Promise<Answer>((resolve, reject) => {
      if (!this.child.connected) return reject(new EngineGone("The notebook's process has ended."));
      this.waiting.set(request.id, { resolve, reject, output });
      this.child.send(request, (error) => {
        if (error !== null) {
          this.waiting.delete(request.id);
          reject(new EngineGone(error.message));
        }
      });
    });
  }

  /** Runs a cell. Its outputs come in order, all before the reply; what it prints later still comes to `output` until the next cell. */
  async execute(cell: Ask<'execute'>, output: (output: CellOutput) => void): Promise<CellReply> {
    this.latestOutput = output;
    const id = ++this.last;
    this.cells.add(id);
    try {
      return await this.ask<CellReply>({ ask: 'execute', id, ...cell }, output);
    } finally {
      this.cells.delete(id);
    }
  }

  complete(request: Ask<'complete'>): Promise<CompleteReply> {
    return this.ask<CompleteReply>({ ask: 'complete', id: ++this.last, ...request });
  }

  inspect(request: Ask<'inspect'>): Promise<InspectReply> {
    return this.ask<InspectReply>({ ask: 'inspect', id: ++this.last, ...request });
  }

  isComplete(request: Ask<'isComplete'>): Promise<IsCompleteReply> {
    return this.ask<IsCompleteReply>({ ask: 'isComplete', id: ++this.last, ...request });
  }

  /** What the process has read and what ran it. */
  facts(): Promise<RunFacts> {
    return this.ask<RunFacts>({ ask: 'facts', id: ++this.last });
  }

  /** Stops the cell that runs or is about to, if there is one. */
  interrupt(): void {
    for (const id of this.cells) {
      this.lifeline.write(`${id}\n`);
      return;
    }
  }

  /** Ends the process at once. */
  async end(): Promise<void> {
    this.child.kill('SIGKILL');
    await this.ended;
  }
}
