/**
 * Three numbers shared by the engine's main thread and its lifeline, so that an interrupt hits the cell it was meant for: whether that
 * cell is still to come, is being compiled (which must not be broken off), runs, or is long done.
 */
export class InterruptWords {
  private readonly words: Int32Array;

  constructor(readonly memory: SharedArrayBuffer = new SharedArrayBuffer(12)) {
    this.words = new Int32Array(memory);
  }

  /** Number of the cell last asked to be interrupted; 0 for none. */
  get wanted(): number {
    return Atomics.load(this.words, 0);
  }

  set wanted(cell: number) {
    Atomics.store(this.words, 0, cell);
  }

  /** Number of the cell whose own code runs now; 0 while none does. */
  get running(): number {
    return Atomics.load(this.words, 1);
  }

  set running(cell: number) {
    Atomics.store(this.words, 1, cell);
  }

  /** Number of the last cell whose interrupt the main thread has dealt with. */
  get dealtWith(): number {
    return Atomics.load(this.words, 2);
  }

  set dealtWith(cell: number) {
    Atomics.store(this.words, 2, cell);
  }
}
