import type { Step, Traced } from '../../suite';

// On the global object, because the library that a notebook imports need not be the copy that its kernel was started from.
const key = Symbol.for('wedgework.shown-steps');
const shared = globalThis as { [key]?: Set<Step> };
const shown = (shared[key] ??= new Set());

/** Keeps the steps behind a value that a cell has shown: the record of a run says what its results rest on. */
export function noteShown(value: unknown): void {
  const steps = (value as Partial<Traced> | null | undefined)?.lineage;
  if (Array.isArray(steps)) for (const step of steps as Step[]) if (typeof step?.what === 'string') shown.add(step);
}

/** The steps behind everything shown so far, in order of first showing; equal steps once. */
export function shownSteps(): readonly Step[] {
  const distinct = new Map<string, Step>();
  for (const step of shown) {
    const text = JSON.stringify(step);
    if (!distinct.has(text)) distinct.set(text, step);
  }
  return [...distinct.values()];
}
