import type { Suite } from '../suite';
import { namedQuantities } from './named-quantities';
import { ratios, type RatioOptions, type RatioTable } from './ratios';

/**
 * Element anomalies of every sample: an element against what its neighbours let expect (Eu/Eu*, Ce/Ce*, Nb/Nb*, Ta/Ta*, Pb/Pb*, Sr/Sr*,
 * Zr/Zr*, Hf/Hf*, ZrHf/ZrHf*, Ti/Ti*). Several formulas are in use for each; the default and the others are in
 * reference-tables/named-quantities.csv, and the one taken is in the notes and the lineage.
 *
 * @param suite n samples
 * @param names which anomalies (default: all)
 * @param options `formulas` to choose another formula, `reference` to divide by another composition, `caesiumAndLead`, `sigma`
 * @returns as `ratios`: one column an anomaly, dimensionless; 1 is no anomaly
 * @throws RangeError for an unknown name or formula
 * @example anomalies(suite, ['Eu/Eu*'], { formulas: { 'Eu/Eu*': 'arithmetic' } }).columns.get('Eu/Eu*').values
 */
export function anomalies(suite: Suite, names: readonly string[] = namedQuantities(), options: RatioOptions = {}): RatioTable {
  if (!Array.isArray(names)) throw new TypeError(`anomalies takes a list of names such as ['Eu/Eu*'], not ${JSON.stringify(names)}.`);
  for (const name of names) {
    if (!namedQuantities().includes(name)) throw new RangeError(`There is no anomaly "${name}". Known: ${namedQuantities().join(', ')}.`);
  }
  return ratios(suite, names, options);
}
