import type { StepDetail, Suite } from '../suite';
import type { SchemeVerdict } from './verdicts';

/** How probabilities are found. */
export type ProbabilityMethod = 'analytic' | 'sampled';

/** 1σ by analyte: a fraction of the value, or a value in the column's unit. */
export type Uncertainty = Readonly<Record<string, { readonly relative?: number; readonly absolute?: number }>>;

/** Probability of each field of a scheme for every sample. */
export interface FieldProbabilities {
  readonly method: ProbabilityMethod;
  /** One array (n) a field, in the order of `scheme.fields`: 0 to 1; NaN where no 1σ is known. */
  readonly values: readonly Float64Array[];
  /** Probability that the sample lies in no field (n). */
  readonly none: Float64Array;
}

/** Settings that `probabilities` needs. */
export interface ProbabilitySettings {
  readonly probability?: ProbabilityMethod | 'none';
  readonly uncertainty: Uncertainty;
  readonly draws: number;
  readonly seed: number;
}

export function probabilities(
  _suite: Suite, _verdicts: readonly SchemeVerdict[], _settings: ProbabilitySettings,
): { readonly byScheme: ReadonlyMap<string, FieldProbabilities>; readonly detail: { readonly [name: string]: StepDetail } } {
  return { byScheme: new Map(), detail: { probability: 'none' } };
}
