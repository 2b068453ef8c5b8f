import { z } from 'zod';
import { findAnalyte, isMassUnit, massUnitFactor, type MassUnit } from '../../chemistry';
import { equivalentSymbols, field, massFactor, once, readCsvTable, type Standing } from '../../tables';

/** One certified or recommended value of a rock reference material, in the analyte's canonical unit. */
export interface MaterialValue {
  readonly analyte: string;
  readonly value: number;
  /** 1σ of the value (a stated 95 % half-width counts as 2σ); NaN where none is stated. */
  readonly sigma: number;
  readonly kind: 'certified' | 'recommended' | 'information';
  readonly standing: Standing;
}

/** A rock reference material as one source gives it. */
export interface RockMaterial {
  readonly material: string;
  readonly issuer: string;
  readonly rock: string;
  readonly source: string;
  readonly values: ReadonlyMap<string, MaterialValue>;
}

const file = 'reference-materials.csv';
const rowSchema = z.strictObject({
  material: field.text,
  issuer: field.text,
  rock_type: field.optionalText,
  analyte: field.text,
  value: field.number,
  uncertainty: field.optionalNumber,
  coverage: field.optionalNumber,
  unit: field.text,
  kind: z.enum(['certified', 'recommended', 'information']),
  source: field.text,
  standing: field.standing,
  note: field.optionalText,
});

const all = once((): ReadonlyMap<string, readonly RockMaterial[]> => {
  const bySource = new Map<string, { material: string; issuer: string; rock: string; source: string; values: Map<string, MaterialValue> }>();
  for (const row of readCsvTable(file, rowSchema)) {
    const key = `${row.material}|${row.source}`;
    let entry = bySource.get(key);
    if (entry === undefined)
      bySource.set(key, (entry = { material: row.material, issuer: row.issuer, rock: row.rock_type, source: row.source, values: new Map() }));
    const analyte = findAnalyte(row.analyte);
    if (analyte === undefined || entry.values.has(row.analyte)) continue;
    const factor = isMassUnit(row.unit) && isMassUnit(analyte.unit) ? massUnitFactor(row.unit, analyte.unit as MassUnit) : 1;
    entry.values.set(row.analyte, {
      analyte: row.analyte,
      value: row.value * factor,
      sigma: row.uncertainty === undefined ? NaN : (row.uncertainty * factor) / (row.coverage ?? 1),
      kind: row.kind,
      standing: row.standing,
    });
  }
  const byMaterial = new Map<string, RockMaterial[]>();
  for (const entry of bySource.values()) byMaterial.set(entry.material, [...(byMaterial.get(entry.material) ?? []), entry]);
  // The best supported source stands first: the compilation by ISO guidelines, then seen values before remembered ones, then more of them.
  const seen = ({ values }: RockMaterial) => [...values.values()].filter(({ standing }) => standing !== 'from memory').length;
  for (const list of byMaterial.values())
    list.sort(
      (a, b) =>
        Number(b.source === 'jochum_2016') - Number(a.source === 'jochum_2016') ||
        Number(seen(b) >= 10) - Number(seen(a) >= 10) ||
        seen(b) - seen(a) ||
        b.values.size - a.values.size,
    );
  return byMaterial;
});

/** Names of the rock reference materials of reference-tables/reference-materials.csv. */
export function rockMaterialNames(): readonly string[] {
  return [...all().keys()];
}

/**
 * A rock reference material with its certified or recommended values.
 *
 * @param name e.g. `BHVO-2`
 * @param source which source (default: the best supported one); values of different sources are never mixed
 * @returns values in canonical units (oxides wt %, elements ppm)
 * @throws RangeError for an unknown material or source, listing those there are
 * @example rockMaterial('BHVO-2').values.get('Ba')
 */
export function rockMaterial(name: string, source?: string): RockMaterial {
  const list = all().get(name);
  if (list === undefined) throw new RangeError(`There is no reference material "${name}". Known: ${rockMaterialNames().join(', ')}.`);
  const found = source === undefined ? list[0] : list.find((each) => each.source === source);
  if (found === undefined) throw new RangeError(`There is no source "${source}" for ${name}. Known: ${list.map((each) => each.source).join(', ')}.`);
  return found;
}

/** The value of a quantity in a material, from whichever form of it the source gives (`FeOT` from `Fe2O3T`, `TiO2` from `Ti`). */
export function materialValue(material: RockMaterial, symbol: string): MaterialValue | undefined {
  const direct = material.values.get(symbol);
  if (direct !== undefined) return direct;
  const target = findAnalyte(symbol);
  for (const other of [...equivalentSymbols(symbol), ...(symbol === 'FeOT' || symbol === 'Fe2O3T' ? ['Fe'] : [])]) {
    const from = material.values.get(other);
    if (from === undefined || target === undefined) continue;
    const factor = massFactor(other, symbol) * massUnitFactor(findAnalyte(other)!.unit as MassUnit, target.unit as MassUnit);
    return { ...from, analyte: symbol, value: from.value * factor, sigma: from.sigma * factor };
  }
  return undefined;
}
