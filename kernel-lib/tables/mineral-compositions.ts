import { z } from 'zod';
import { field, once, readCsvTable, ReferenceTableError } from './read';
import type { Standing } from './standing';

/** One mineral analysis or computed end member: oxides (and F, Cl) in wt %. */
export interface MineralComposition {
  readonly mineral: string;
  /** What tells it from others of its kind: `Fo80`, `An75`, `Wo45En45Fs10`, a locality. */
  readonly label: string;
  /** wt % by oxide symbol; an oxide that the table leaves empty is not here. */
  readonly oxides: ReadonlyMap<string, number>;
  readonly source: string;
  readonly standing: Standing;
  readonly note: string;
}

const oxideNames = ['SiO2', 'TiO2', 'Al2O3', 'Cr2O3', 'Fe2O3', 'FeO', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5', 'H2O', 'ZrO2', 'F', 'Cl'] as const;

const rowSchema = z.strictObject({
  mineral: field.text,
  label: field.text,
  SiO2: field.optionalNumber,
  TiO2: field.optionalNumber,
  Al2O3: field.optionalNumber,
  Cr2O3: field.optionalNumber,
  Fe2O3: field.optionalNumber,
  FeO: field.optionalNumber,
  MnO: field.optionalNumber,
  MgO: field.optionalNumber,
  CaO: field.optionalNumber,
  Na2O: field.optionalNumber,
  K2O: field.optionalNumber,
  P2O5: field.optionalNumber,
  H2O: field.optionalNumber,
  ZrO2: field.optionalNumber,
  F: field.optionalNumber,
  Cl: field.optionalNumber,
  source: field.text,
  standing: field.standing,
  note: field.optionalText,
});

const all = once((): readonly MineralComposition[] => {
  const seen = new Set<string>();
  return readCsvTable('mineral-compositions.csv', rowSchema).map((row) => {
    const { mineral, label, source, standing, note } = row;
    if (seen.has(`${mineral}\n${label}`)) throw new ReferenceTableError(`mineral-compositions.csv: ${mineral} "${label}" stands there twice.`);
    seen.add(`${mineral}\n${label}`);
    const oxides = new Map<string, number>();
    for (const oxide of oxideNames) if (row[oxide] !== undefined) oxides.set(oxide, row[oxide]);
    return { mineral, label, oxides, source, standing, note };
  });
});

/** Every mineral composition of reference-tables/mineral-compositions.csv. */
export function mineralCompositions(): readonly MineralComposition[] {
  return all();
}

/**
 * A mineral composition by mineral and label.
 *
 * @throws RangeError listing the labels there are
 * @example mineralComposition('olivine', 'Fo80').oxides.get('MgO') // 42.06
 */
export function mineralComposition(mineral: string, label: string): MineralComposition {
  const found = all().find((entry) => entry.mineral === mineral && entry.label === label);
  if (found !== undefined) return found;
  const labels = all()
    .filter((entry) => entry.mineral === mineral)
    .map((entry) => `"${entry.label}"`);
  const known = labels.length > 0 ? `It has: ${labels.join(', ')}.` : `It has: ${[...new Set(all().map((entry) => entry.mineral))].join(', ')}.`;
  throw new RangeError(`reference-tables/mineral-compositions.csv has no ${mineral} "${label}". ${known}`);
}
