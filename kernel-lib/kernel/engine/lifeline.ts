/**
 * Runs as a worker thread beside the engine's main thread, so that a cell in an endless loop can still be stopped. It listens on a pipe
 * from the process that started the engine: a line with a cell's number asks to interrupt that cell; the end of the pipe means that
 * process is gone.
 */
import { Session as Inspector } from 'node:inspector';
import { Socket } from 'node:net';
import { parentPort, workerData } from 'node:worker_threads';
import { InterruptWords } from './interrupt-words';

const { pipe, memory } = workerData as { pipe: number; memory: SharedArrayBuffer };
const words = new InterruptWords(memory);
/** How often it looks whether the main thread has answered, in milliseconds. */
const pause = 50;
/** Looks that pass before code that does not answer is terminated. */
const patience = 5;

function interrupt(cell: number): void {
  words.wanted = cell;
  parentPort!.postMessage(cell);
  let looks = 0;
  const timer = setInterval(() => {
    if (words.dealtWith >= cell) return clearInterval(timer);
    // Only the cell's own code is ever broken off: the compiler's state would not survive it.
    if (words.running !== cell) return;
    looks++;
    // Plain synchronous code can be broken by the signal, as an error that the cell's own finally blocks still see.
    if (looks === 1 && process.platform !== 'win32') process.kill(process.pid, 'SIGINT');
    // Code that ran on after an await is reached through the debugger's door only.
    if (looks % patience === 0) {
      const inspector = new Inspector();
      inspector.connectToMainThread();
      inspector.post('Runtime.terminateExecution', () => inspector.disconnect());
    }
  }, pause);
}

const end = () => process.kill(process.pid, 'SIGKILL');
let rest = '';
// A socket rather than a file stream: a read that blocks a thread would keep the process from ending by itself.
new Socket({ fd: pipe, readable: true, writable: false })
  .setEncoding('utf8')
  .on('data', (text: string) => {
    const lines = (rest + text).split('\n');
    rest = lines.pop()!;
    for (const line of lines) interrupt(Number(line));
  })
  .on('error', end)
  .on('close', end);
