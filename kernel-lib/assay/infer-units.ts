import { massUnitFactor, isMassUnit, type MassUnit } from '../chemistry';
import { cellLook } from './grid';
import type { Layout } from './layout';
import { headKey, type Draft, type PlanNotes } from './planned-column';
import { plausibleRanges } from './spellings';

/** A missing unit is concluded only where one unit alone makes the numbers possible for a rock. */
export function inferUnits(layout: Layout, drafts: Draft[], notes: PlanNotes): void {
  const step = Math.max(1, Math.floor(layout.body.length / 2000));
  for (const made of drafts) {
    if (made.role !== 'analyte' || made.unit === '') continue;
    const range = plausibleRanges().get(made.name);
    const values: number[] = [];
    for (let i = 0; i < layout.body.length; i += step) {
      if (layout.grid.look(layout.body[i], made.index) === cellLook.number && layout.grid.seen > 0) values.push(layout.grid.seen);
    }
    const fits = (unit: MassUnit): boolean => {
      const factor = massUnitFactor(unit, made.unit as MassUnit);
      const inside = values.filter((value) => value * factor >= range!.low && value * factor <= range!.high).length;
      return inside >= 0.8 * values.length;
    };
    if (made.knownUnit) {
      if (range !== undefined && values.length >= 3 && isMassUnit(made.sheetUnit) && values.every((value) => value * made.factor > range.high)) {
        notes.pleaseCheck.push(`"${made.head}": every value is too high for ${made.name} in ${made.sheetUnit}; is the unit right?`);
      }
      continue;
    }
    const possible = range === undefined || values.length === 0 ? [] : (['wt%', 'ppm', 'ppb'] as const).filter(fits);
    if (values.length === 0) {
      made.sheetUnit = made.unit;
      made.knownUnit = true;
      made.note = 'no number in it';
    } else if (possible.length === 1) {
      made.sheetUnit = possible[0];
      made.factor = massUnitFactor(possible[0], made.unit as MassUnit);
      made.knownUnit = true;
      notes.inferred.push(`"${made.head}" has no unit: its size allows only ${possible[0]}`);
    } else {
      notes.pleaseCheck.push(
        `"${made.head}" has no unit, and its size allows ${possible.length === 0 ? 'none for sure' : possible.join(' or ')}: kept as a label until columns: { '${headKey(made.head)}': { unit: … } } says which`,
      );
      Object.assign(made, { role: 'label', name: headKey(made.head), unit: '', factor: 1, note: 'unit not known' } as const);
    }
  }
}
