import type { DisplayOutput } from './output';

/**
 * What a library in a cell may ask of the kernel that runs the cell. It hangs on the global object, because the library that a notebook
 * imports need not be the copy that the kernel was started from.
 */
export interface SessionLink {
  show(output: DisplayOutput): void;
  /** Aborts when the running cell is interrupted. */
  signal(): AbortSignal;
  readonly quiet: boolean;
}

const key = Symbol.for('wedgework.session');

export function sessionLink(): SessionLink | undefined {
  return (globalThis as { [key]?: SessionLink })[key];
}

/** Called once by the engine. */
export function openSessionLink(link: SessionLink): void {
  (globalThis as { [key]?: SessionLink })[key] = link;
}
