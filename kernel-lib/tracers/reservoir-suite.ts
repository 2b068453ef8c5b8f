import { column, step, suiteOf, type Suite } from '../suite';
import { reservoir, reservoirUnit } from '../tables';

/**
 * Reservoirs as the samples of a suite, so that whatever is done to lavas can be done to them: ratios, patterns, diagrams, mixing.
 *
 * @param keys reservoir keys, e.g. `['n-morb-1989', 'subducting-sediment-1998']`
 * @returns one sample a reservoir (sample name: its key; label `name`: its full name), every value that any of them has, in the library's units
 * @throws RangeError for an unknown key
 * @source each reservoir's own
 * @example reservoirSuite(['n-morb-1989', 'oib-1989']).values('Th')
 */
export function reservoirSuite(keys: readonly string[]): Suite {
  if (!Array.isArray(keys) || keys.length === 0) throw new RangeError('reservoirSuite takes a list of reservoir keys with at least one in it.');
  const found = keys.map(reservoir);
  const values = new Map<string, { unit: string; values: Float64Array }>();
  found.forEach((each, i) => {
    for (const entry of each.values.values()) {
      // Second values of one analyte, kept for plotting or for an older normalisation, are no analytes of their own.
      if (entry.analyte.includes('_')) continue;
      let of = values.get(entry.analyte);
      if (of === undefined) values.set(entry.analyte, (of = { unit: reservoirUnit(entry), values: new Float64Array(keys.length).fill(NaN) }));
      of.values[i] =
        of.unit === 'ppm' && entry.unit === 'wt%' ? entry.value * 1e4 : of.unit === 'wt%' && entry.unit === 'ppm' ? entry.value / 1e4 : entry.value;
    }
  });
  const recalled = found.filter((each) => [...each.values.values()].some(({ standing }) => standing === 'from memory'));
  const because = step(
    'reservoirSuite',
    { reservoirs: [...keys] },
    {
      sources: [...new Set(found.flatMap((each) => [...each.values.values()].map(({ source }) => source)))],
      tables: ['reservoirs.csv'],
      fromMemory: recalled.map(({ name }) => `values of ${name}`),
    },
  );
  return suiteOf({
    columns: [...values].map(([symbol, of]) => column({ symbol, unit: of.unit, values: of.values })),
    labels: { sample: [...keys], name: found.map(({ name }) => name) },
    lineage: [because],
  });
}
