import { z } from 'zod';
import { field, once, readCsvTable, type Standing } from '../tables';

/** One way to compute a named quantity of reference-tables/named-quantities.csv. */
export interface QuantityFormula {
  /** The name as written in an expression, e.g. `Eu/Eu*`. */
  readonly quantity: string;
  /** Which of the formulas in use, e.g. `geometric`. */
  readonly variant: string;
  readonly isDefault: boolean;
  /** An expression over analytes; a trailing N means divided by the reference. */
  readonly formula: string;
  /** Key of the reservoir that is divided by unless another is asked for. */
  readonly reference: string;
  readonly what: string;
  readonly source: string;
  readonly standing: Standing;
}

/** Chosen formulas by quantity, e.g. `{ 'Eu/Eu*': 'arithmetic' }`. */
export type FormulaChoices = Readonly<Record<string, string>>;

const rowSchema = z.strictObject({
  quantity: field.text,
  variant: field.text,
  default: z.enum(['yes', 'no']),
  formula: field.text,
  reference: field.text,
  what: field.text,
  source: field.text,
  standing: field.standing,
});

const all = once((): readonly QuantityFormula[] =>
  readCsvTable('named-quantities.csv', rowSchema).map(({ default: isDefault, ...row }) => ({ ...row, isDefault: isDefault === 'yes' })),
);

/** Every formula of every named quantity (the anomalies), defaults marked. */
export function quantityFormulas(): readonly QuantityFormula[] {
  return all();
}

/** The names of all named quantities: `Eu/Eu*`, `Nb/Nb*` … */
export const namedQuantities: () => readonly string[] = once(() => [...new Set(all().map(({ quantity }) => quantity))]);

/**
 * The formula of a named quantity.
 *
 * @param quantity e.g. `Eu/Eu*`
 * @param variant one of its formulas (default: the one marked as default in the table)
 * @throws RangeError listing what there is
 * @example quantityFormula('Eu/Eu*').formula // 'EuN/sqrt(SmN*GdN)'
 */
export function quantityFormula(quantity: string, variant?: string): QuantityFormula {
  const known = all().filter((entry) => entry.quantity === quantity);
  if (known.length === 0) throw new RangeError(`There is no named quantity "${quantity}". Known: ${namedQuantities().join(', ')}.`);
  const found = known.find((entry) => (variant === undefined ? entry.isDefault : entry.variant === variant));
  if (found === undefined) throw new RangeError(`${quantity} has no formula "${variant}". Known: ${known.map((entry) => entry.variant).join(', ')}.`);
  return found;
}

/** The named quantities that an expression mentions, longest names first, so that one name inside another is not taken for it. */
export function quantitiesIn(expression: string): readonly string[] {
  return [...namedQuantities()]
    .sort((a, b) => b.length - a.length)
    .filter((name) => {
      const found = expression.includes(name);
      if (found) expression = expression.replaceAll(name, ' ');
      return found;
    });
}
