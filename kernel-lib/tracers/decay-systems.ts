import { z } from 'zod';
import { field, once, publishedConstant, readCsvTable, type PublishedConstant } from '../tables';

/** A parent–daughter pair whose decay moves an isotope ratio with time. */
export interface DecaySystem {
  /** Measured daughter ratio, e.g. `143Nd/144Nd`. */
  readonly daughterRatio: string;
  /** Parent over the same reference isotope, e.g. `147Sm/144Nd`. */
  readonly parentRatio: string;
  readonly parent: string;
  readonly daughter: string;
  /** parentRatio = (parent/daughter by weight) · (intercept + slope · daughterRatio). */
  readonly intercept: number;
  readonly slope: number;
}

const rowSchema = z.strictObject({
  parent_daughter: field.text,
  daughter_ratio: field.text,
  parent: field.text,
  daughter: field.text,
  intercept: field.number,
  slope: field.number,
  source: field.text,
  standing: field.standing,
  note: field.optionalText,
});

const all = once(
  (): ReadonlyMap<string, DecaySystem> =>
    new Map(
      readCsvTable('parent-daughter-factors.csv', rowSchema).map((row) => [
        row.daughter_ratio,
        {
          daughterRatio: row.daughter_ratio,
          parentRatio: row.parent_daughter,
          parent: row.parent,
          daughter: row.daughter,
          intercept: row.intercept,
          slope: row.slope,
        },
      ]),
    ),
);

/** The decay systems of reference-tables/parent-daughter-factors.csv, by daughter ratio. */
export function decaySystems(): ReadonlyMap<string, DecaySystem> {
  return all();
}

/** The decay constant taken for each daughter ratio unless another is asked for: the best checked one of reference-tables/constants.csv. */
export const usualDecayConstants: Readonly<Record<string, string>> = {
  '87Sr/86Sr': 'lambda-87Rb-sj77',
  '143Nd/144Nd': 'lambda-147Sm',
  '176Hf/177Hf': 'lambda-176Lu-s04',
};

/** A decay constant (1/a) by its key in reference-tables/constants.csv. */
export function decayConstant(key: string): PublishedConstant {
  const found = publishedConstant(key);
  if (found.unit !== '1/a') throw new RangeError(`"${key}" is not a decay constant: its unit is ${found.unit}.`);
  return found;
}
