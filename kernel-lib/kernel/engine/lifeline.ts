/**
 * Runs as a worker thread beside the engine's main thread, so that a cell in an endless loop can still be stopped. It listens on a pipe
 * from the process that started the engine: a byte asks to interrupt the running cell; the end of the pipe means that process is gone.
 */
import { Session as Inspector } from 'node:inspector';
import { Socket } from 'node:net';
import { parentPort, workerData } from 'node:worker_threads';

const { pipe, answered } = workerData as { pipe: number; answered: SharedArrayBuffer };
/** Counts the interrupts that the main thread has dealt with. */
const dealtWith = new Int32Array(answered);
/** The time that the main thread has to answer before its running code is terminated, in milliseconds. */
const patience = 250;

function interrupt(): void {
  const before = Atomics.load(dealtWith, 0);
  parentPort!.postMessage('interrupt');
  // Plain synchronous code of a cell can be broken by the signal, as an error that the cell's own finally blocks still see.
  if (process.platform !== 'win32') process.kill(process.pid, 'SIGINT');
  setTimeout(() => {
    if (Atomics.load(dealtWith, 0) !== before) return;
    // The main thread is in code that ran on after an await: only the debugger's door reaches it.
    const inspector = new Inspector();
    inspector.connectToMainThread();
    inspector.post('Runtime.terminateExecution', () => inspector.disconnect());
  }, patience);
}

// A socket rather than a file stream: a read that blocks a thread would keep the process from ending by itself.
new Socket({ fd: pipe, readable: true, writable: false })
  .on('data', interrupt)
  .on('error', () => process.kill(process.pid, 'SIGKILL'))
  .on('close', () => process.kill(process.pid, 'SIGKILL'));
