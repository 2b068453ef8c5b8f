import { derivedColumn, resolveColumn, step, type Suite } from '../suite';
import { molarMass } from '../tables';
import { totalIron } from './total-iron';

/**
 * Mg-number: 100 · Mg / (Mg + Fe²⁺), molar.
 *
 * @param suite n samples with MgO (wt %) and iron in any form
 * @param options `iron`: `total` (default) counts all iron as Fe²⁺; `measured` uses the column FeO
 * @returns the suite with the column `Mg-number` (0–100, n; NaN where MgO or iron has no usable value)
 * @throws RangeError when the suite has no MgO, or no FeO with `measured`
 * @example withMagnesiumNumber(suite).values('Mg-number')
 */
export function withMagnesiumNumber(suite: Suite, options: { readonly iron?: 'total' | 'measured' } = {}): Suite {
  const { iron = 'total' } = options;
  if (iron !== 'total' && iron !== 'measured') throw new RangeError(`withMagnesiumNumber: iron must be "total" or "measured", not "${String(iron)}".`);
  const magnesium = resolveColumn(suite, 'MgO') ?? suite.column('MgO');
  const ferrous = iron === 'total' ? totalIron(suite).column : suite.column('FeO');
  const perMg = 1 / molarMass('MgO');
  const perFe = 1 / molarMass('FeO');
  const values = new Float64Array(suite.size);
  for (let i = 0; i < values.length; i++) {
    const mg = magnesium.values[i] * perMg;
    values[i] = (100 * mg) / (mg + ferrous.values[i] * perFe);
  }
  let sigma: Float64Array | undefined;
  if (magnesium.sigma !== undefined && ferrous.sigma !== undefined) {
    // d(Mg#) = Mg#·(1 − Mg#/100)·(dMg/Mg − dFe/Fe)
    sigma = values.map((value, i) => value * (1 - value / 100) * Math.hypot(magnesium.sigma![i] / magnesium.values[i], ferrous.sigma![i] / ferrous.values[i]));
  }
  const says = `Mg-number is 100 Mg/(Mg + Fe2+), molar, with ${iron === 'total' ? 'all iron as Fe2+' : 'measured FeO'}.`;
  const because = step('withMagnesiumNumber', { iron }, { tables: ['atomic-weights.csv'], says });
  return suite.with([derivedColumn('Mg-number', values, '', sigma)], because);
}
