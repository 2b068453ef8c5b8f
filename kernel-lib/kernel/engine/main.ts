/** The engine: a process of its own for one notebook's cells. Started by engine-process.ts, and of no use by hand. */
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { Worker } from 'node:worker_threads';
import type { EngineAnswer, EngineOptions, EngineReport, EngineRequest } from './messages';
import { writeInto } from '../../display';
import { runFacts } from '../record/run-facts';
import { InterruptWords } from './interrupt-words';
import { Session } from './session';
import { cellCompilerVersion } from './tslab-contract';

const lifelinePipe = 4;

async function main(): Promise<void> {
  const options = JSON.parse(process.argv[2]) as EngineOptions;
  const tell = (report: EngineReport) => process.send?.(report);
  const words = new InterruptWords();
  const session = new Session({ ...options, words, libraryRequire: createRequire(join(__dirname, 'main.js')) });
  if (options.scratch !== undefined) writeInto(options.scratch);
  redirectStreams(session);
  refuseInput();
  openLifeline(session, words);
  process.on('uncaughtException', (error) => session.report(error));
  process.on('unhandledRejection', (reason) => session.report(reason));
  const warning = options.preload ? await session.preload() : undefined;
  tell({ tell: 'ready', compiler: cellCompilerVersion, warning });

  let queue: Promise<unknown> = Promise.resolve();
  process.on('message', (request: EngineRequest) => {
    const { id } = request;
    queue = queue
      .then(() => answer(session, request, tell))
      .then((answered) => tell({ tell: 'answer', id, answer: answered }))
      .catch((error: unknown) => tell({ tell: 'failed', id, message: error instanceof Error ? error.message : String(error) }));
  });
}

async function answer(session: Session, request: EngineRequest, tell: (report: EngineReport) => void): Promise<EngineAnswer> {
  switch (request.ask) {
    case 'execute':
      // Out of the message's own callback: code terminated inside it would leave the channel deaf.
      await new Promise((resolve) => setImmediate(resolve));
      // Awaited here, which listens at once: a promise handed on is listened to a moment later, and terminated code takes what waits
      // for that moment with it.
      return await session.run(request.code, request.label, (output) => tell({ tell: 'output', id: request.id, output }), request.id);
    case 'complete':
      return session.complete(request.code, request.cursor);
    case 'inspect':
      return session.inspect(request.code, request.cursor);
    case 'isComplete':
      return session.isComplete(request.code);
    case 'facts':
      return runFacts();
  }
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

function openLifeline(session: Session, words: InterruptWords): void {
  const worker = new Worker(join(__dirname, 'lifeline.js'), { workerData: { pipe: lifelinePipe, memory: words.memory }, stdin: false });
  worker.unref();
  worker.on('message', (cell: number) => {
    words.dealtWith = cell;
    session.interrupt(cell);
    // A termination inside a timer leaves Node's timers unarmed; setting one arms them again.
    setTimeout(() => {}, 1);
  });
  // The signal breaks synchronous code in a cell; without a listener it would end the process between cells.
  process.on('SIGINT', () => {});
}

void main();
