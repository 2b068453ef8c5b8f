import { z } from 'zod';
import { elementOfOxide, findAnalyte, formulaMass, formulaOf, oxideOfElement, parseFormula } from '../chemistry';
import { field, once, readCsvTable } from './read';

const rowSchema = z.strictObject({ z: field.number, element: field.text, weight: field.number, source: field.text, standing: field.standing, note: field.optionalText });

const weights = once((): ReadonlyMap<string, number> => new Map(readCsvTable('atomic-weights.csv', rowSchema).map((row) => [row.element, row.weight])));

/**
 * Standard atomic weight (IUPAC 2021, abridged).
 *
 * @param element symbol, e.g. `Fe`
 * @returns g/mol
 * @throws RangeError for an element that is not in reference-tables/atomic-weights.csv
 */
export function atomicWeight(element: string): number {
  const weight = weights().get(element);
  if (weight === undefined) throw new RangeError(`No atomic weight for "${element}" in reference-tables/atomic-weights.csv.`);
  return weight;
}

const masses = new Map<string, number>();

/**
 * Molar mass of an oxide, an element or a simple formula; total-iron symbols count as their formula (`FeOT` as FeO).
 *
 * @param symbol e.g. `SiO2`, `FeOT`, `Ba`
 * @returns g/mol
 * @throws RangeError when it is not a formula of known elements
 * @example molarMass('SiO2') // 60.083
 */
export function molarMass(symbol: string): number {
  let mass = masses.get(symbol);
  if (mass === undefined) masses.set(symbol, (mass = formulaMass(formulaOf(symbol), atomicWeight)));
  return mass;
}

/** Cations in one formula unit of an oxide: 1 for SiO2, 2 for Al2O3. */
export function cationsPerFormula(oxide: string): number {
  const element = elementOfOxide(oxide);
  if (element === undefined) throw new RangeError(`"${oxide}" is not an oxide that the library knows.`);
  return parseFormula(formulaOf(oxide)).get(element)!;
}

/**
 * Factor by which a mass of one substance becomes a mass of the other holding as much of the same cation: mass × factor.
 *
 * @param from an oxide or its element, e.g. `Fe2O3`, `Ti`
 * @param to another oxide of the same cation, or its element, e.g. `FeO`, `TiO2`
 * @throws RangeError when the two do not share their cation
 * @example massFactor('Fe2O3', 'FeO') // 0.8998
 * @example massFactor('Ti', 'TiO2') // 1.6685
 */
export function massFactor(from: string, to: string): number {
  const source = parseFormula(formulaOf(from));
  const target = parseFormula(formulaOf(to));
  // The cation stands first in a formula, as the trade writes oxides.
  const [cation, inSource] = [...source][0];
  const inTarget = target.get(cation);
  if (inTarget === undefined || [...target][0][0] !== cation) throw new RangeError(`${from} cannot be expressed as ${to}: they do not share a cation.`);
  return inSource / molarMass(from) / (inTarget / molarMass(to));
}

/**
 * Symbols that carry the same quantity in another form, in the order in which they are looked for: `Ti` ↔ `TiO2`, `FeOT` ↔ `Fe2O3T`.
 */
export function equivalentSymbols(symbol: string): readonly string[] {
  if (symbol === 'FeOT') return ['Fe2O3T'];
  if (symbol === 'Fe2O3T') return ['FeOT'];
  if (symbol === 'Fe') return ['FeOT', 'Fe2O3T'];
  if (symbol === 'FeO' || symbol === 'Fe2O3') return [];
  const analyte = findAnalyte(symbol);
  const other = analyte?.kind === 'element' ? oxideOfElement(symbol) : analyte?.kind === 'oxide' ? elementOfOxide(symbol) : undefined;
  // Only the usual oxide of an element stands for it: H2O does not stand for hydrogen, nor CO2's C for organic carbon.
  return other !== undefined && (analyte?.kind === 'element' || oxideOfElement(other) === symbol) ? [other] : [];
}
