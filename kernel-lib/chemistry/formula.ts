/** Element counts of a formula without brackets, e.g. `Al2O3` → Al 2, O 3. */
export type FormulaCounts = ReadonlyMap<string, number>;

const part = /([A-Z][a-z]?)(\d*)/y;

/**
 * Reads a simple chemical formula (no brackets, no charges).
 *
 * @param formula e.g. `SiO2`, `Al2O3`, `Ba`
 * @returns how many atoms of each element, in order of appearance
 * @throws RangeError when the text is not such a formula
 * @example parseFormula('Al2O3').get('O') // 3
 */
export function parseFormula(formula: string): FormulaCounts {
  const counts = new Map<string, number>();
  part.lastIndex = 0;
  while (part.lastIndex < formula.length) {
    const match = part.exec(formula);
    if (match === null) break;
    counts.set(match[1], (counts.get(match[1]) ?? 0) + (match[2] === '' ? 1 : Number(match[2])));
    if (part.lastIndex === formula.length) return counts;
  }
  throw new RangeError(`"${formula}" is not a chemical formula: expected element symbols with counts, such as SiO2 or Al2O3.`);
}

/**
 * Molar mass of a formula.
 *
 * @param formula e.g. `SiO2`
 * @param atomicWeight gives the atomic weight of an element in g/mol; throws or returns undefined for an unknown one
 * @returns g/mol
 */
export function formulaMass(formula: string, atomicWeight: (element: string) => number): number {
  let mass = 0;
  for (const [element, count] of parseFormula(formula)) mass += count * atomicWeight(element);
  return mass;
}
