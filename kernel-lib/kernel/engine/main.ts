/** The engine: a process of its own for one notebook's cells. Started by engine-process.ts, and of no use by hand. */
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { Worker } from 'node:worker_threads';
import type { EngineOptions, EngineReport, EngineRequest } from './messages';
import { writeInto } from '../../display';
import { runFacts } from '../record/run-facts';
import { Session } from './session';
import { cellCompilerVersion } from './tslab-contract';

const lifelinePipe = 4;

async function main(): Promise<void> {
  const options = JSON.parse(process.argv[2]) as EngineOptions;
  const tell = (report: EngineReport) => process.send?.(report);
  const session = new Session({ ...options, libraryRequire: createRequire(join(__dirname, 'main.js')) });
  if (options.scratch !== undefined) writeInto(options.scratch);
  redirectStreams(session);
  refuseInput();
  openLifeline(session);
  process.on('uncaughtException', (error) => session.report(error));
  process.on('unhandledRejection', (reason) => session.report(reason));
  const warning = options.preload ? await session.preload() : undefined;
  tell({ tell: 'ready', compiler: cellCompilerVersion, warning });

  let queue: Promise<void> = Promise.resolve();
  process.on('message', (request: EngineRequest) => {
    const { id } = request;
    queue = queue.then(async () => {
      switch (request.ask) {
        case 'execute':
          // Out of the message's own callback: code terminated inside it would leave the channel deaf.
          await new Promise((resolve) => setImmediate(resolve));
          return void tell({ tell: 'answer', id, answer: await session.run(request.code, request.label, (output) => tell({ tell: 'output', id, output })) });
        case 'complete':
          return void tell({ tell: 'answer', id, answer: session.complete(request.code, request.cursor) });
        case 'inspect':
          return void tell({ tell: 'answer', id, answer: session.inspect(request.code, request.cursor) });
        case 'isComplete':
          return void tell({ tell: 'answer', id, answer: session.isComplete(request.code) });
        case 'facts':
          return void tell({ tell: 'answer', id, answer: runFacts() });
      }
    });
  });
}

function redirectStreams(session: Session): void {
  const writer = (name: 'stdout' | 'stderr') =>
    ((chunk: string | Uint8Array, encodingOrDone?: BufferEncoding | (() => void), done?: () => void) => {
      session.print(name, typeof chunk === 'string' && typeof encodingOrDone === 'string' ? Buffer.from(chunk, encodingOrDone) : chunk);
      (typeof encodingOrDone === 'function' ? encodingOrDone : done)?.();
      return true;
    }) as typeof process.stdout.write;
  process.stdout.write = writer('stdout');
  process.stderr.write = writer('stderr');
}

/** A notebook cell has no keyboard: say so instead of hanging or giving an empty line. */
function refuseInput(): void {
  Object.defineProperty(process, 'stdin', {
    configurable: true,
    get: () => {
      throw new Error('A notebook cell cannot ask for keyboard input. Put the value into a variable, or into the cell tagged "parameters".');
    },
  });
}

function openLifeline(session: Session): void {
  const answered = new SharedArrayBuffer(4);
  const dealtWith = new Int32Array(answered);
  const worker = new Worker(join(__dirname, 'lifeline.js'), { workerData: { pipe: lifelinePipe, answered }, stdin: false });
  worker.unref();
  worker.on('message', () => {
    Atomics.add(dealtWith, 0, 1);
    session.interrupt();
    // A termination inside a timer leaves Node's timers unarmed; setting one arms them again.
    setTimeout(() => {}, 1);
  });
  // The signal breaks synchronous code in a cell; without a listener it would end the process between cells.
  process.on('SIGINT', () => {});
}

void main();
