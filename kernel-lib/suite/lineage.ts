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
  /** Published values used whose standing is "from memory", in words, so that an author can check each: `La in C1 chondrite 0.237 ppm (…)`. */
  readonly fromMemory: readonly string[];
  /** The step in a sentence or two for a methods section, parameters filled in; '' for a step that a methods section would not mention. */
  readonly says: string;
}

/** Anything that can say what made it. */
export interface Traced {
  readonly lineage: readonly Step[];
}

/** What a step may carry besides its name and detail; all of it optional. */
export type StepCarries = Partial<Pick<Step, 'sources' | 'tables' | 'fromMemory' | 'says'>>;

/** A step with the parts that it does not need left empty. */
export function step(what: string, detail: Step['detail'] = {}, carries: StepCarries = {}): Step {
  return { what, detail, sources: carries.sources ?? [], tables: carries.tables ?? [], fromMemory: carries.fromMemory ?? [], says: carries.says ?? '' };
}

/**
 * The lineage of a result that rests on several others: all their steps in order, a step that they share once.
 *
 * @example joinLineages(suite.lineage, slab.lineage)
 */
export function joinLineages(...lineages: readonly (readonly Step[])[]): readonly Step[] {
  return [...new Set(lineages.flat())];
}
