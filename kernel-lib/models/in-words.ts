import { bibliography, shortSource } from '../tables';
import type { UsedCoefficient } from './coefficients';
import type { ChosenMineral } from './minerals';

const cite = (key: string): string => (bibliography().has(key) ? shortSource(key) : key);

/** @internal Coefficients used that nobody has checked against their source, in words. */
export function recalledCoefficients(used: Iterable<UsedCoefficient>): string[] {
  const recalled = [...used].filter(({ standing }) => standing === 'from memory');
  return [...new Set(recalled.map(({ mineral, analyte, meltType, value, source }) => `D of ${analyte} in ${mineral} (${meltType}) ${value} (${cite(source)})`))];
}

/** @internal Mineral compositions used that nobody has checked against their source, in words. */
export function recalledMinerals(chosen: Iterable<ChosenMineral>): string[] {
  const recalled = [...chosen].filter(({ standing }) => standing === 'from memory');
  return [...new Set(recalled.map(({ mineral, label, source }) => `composition of ${mineral} ${label} (${cite(source)})`))];
}

/** @internal Shares as a sentence has them: `olivine 20 %, plagioclase 80 %`. */
export function sharesInWords(shares: Readonly<Record<string, number>>): string {
  const sum = Object.values(shares).reduce((total, each) => total + each, 0);
  return Object.entries(shares).map(([name, share]) => `${name} ${Number(((100 * share) / sum).toPrecision(3))} %`).join(', ');
}
