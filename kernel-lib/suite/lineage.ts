/** A value that a step may record about itself: plain data, so that it can be written down and compared. */
export type StepDetail = string | number | boolean | null | readonly StepDetail[] | { readonly [name: string]: StepDetail };

/** One step that made a result: what was done, with which parameters, by which published method. */
export interface Step {
  /** The public function that did it, e.g. `readAssays`, `volatileFree`. */
  readonly what: string;
  /** Its parameters and what it found worth telling (counts, seed, file name and SHA-256 …). */
  readonly detail: { readonly [name: string]: StepDetail };
  /** Source keys (reference-tables/bibliography/) of the methods and tables used. */
  readonly sources: readonly string[];
  /** Paths inside reference-tables/ of the tables used. */
  readonly tables: readonly string[];
}

/** Anything that can say what made it. */
export interface Traced {
  readonly lineage: readonly Step[];
}

/** A step with the parts that it does not need left empty. */
export function step(what: string, detail: Step['detail'] = {}, from: { sources?: readonly string[]; tables?: readonly string[] } = {}): Step {
  return { what, detail, sources: from.sources ?? [], tables: from.tables ?? [] };
}
