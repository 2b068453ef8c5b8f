import { z } from 'zod';
import { once, readJsonTable, standings } from '../tables';

const number = z.number();
const from = { what: z.string(), source: z.string(), standing: z.enum(standings) };
const range = z.tuple([number, number]);
const ranged = { range: z.record(z.string(), range), rangeStanding: z.enum(standings) };

/** @internal reference-tables/thermometers.json */
export const thermometers = once(() =>
  readJsonTable(
    'thermometers.json',
    z.strictObject({
      note: z.string(),
      magnesia: z.strictObject({ ...from, ...ranged, perMgO: number, constant: number }),
      liquid: z.strictObject({
        ...from,
        ...ranged,
        constant: number,
        magnesiumNumber: number,
        MgO: number,
        FeO: number,
        alkalis: number,
        H2O: number,
      }),
      olivineLiquid: z.strictObject({
        ...from,
        ...ranged,
        n0: number,
        n1: number,
        n2: number,
        d0: number,
        dMg: number,
        dNM: number,
        dSi: number,
        dNF: number,
        dH2O: number,
        dP: number,
      }),
      exchange: z.strictObject({ ...from, value: number, sigma: number }),
      waterSolubility: z.strictObject({ ...from, a: number, power: number, b: number }),
    }),
  ),
);

const volume = z.strictObject({ V: number, dVdT: number, dVdP: number });
const keyed = { source: z.string(), standing: z.enum(standings) };

/** @internal reference-tables/melt-density.json */
export const densityTable = once(() =>
  readJsonTable(
    'melt-density.json',
    z.strictObject({
      note: z.string(),
      silicates: z.strictObject({ ...keyed, T0: number, volumes: z.record(z.string(), volume) }),
      sodaTitania: z.strictObject({ ...keyed, value: number }),
      water: z.strictObject({ ...keyed, T0: number, V: number, dVdT: number, dVdP: number }),
      range: z.strictObject({ ...keyed, what: z.string(), temperature: range }),
    }),
  ),
);

/** @internal reference-tables/melt-viscosity.json */
export const viscosityTable = once(() =>
  readJsonTable(
    'melt-viscosity.json',
    z.strictObject({
      note: z.string(),
      ...keyed,
      A: number,
      B: z.record(z.string(), number),
      C: z.record(z.string(), number),
      range: z.strictObject({ temperature: range, standing: z.enum(standings) }),
      crystals: z.strictObject({ ...from, most: number, power: number }),
    }),
  ),
);

const zircon = z.strictObject({ ...from, ...ranged, constant: number, perM: number, perInverseT: number });

/** @internal reference-tables/saturation.json */
export const saturationTable = once(() =>
  readJsonTable(
    'saturation.json',
    z.strictObject({
      note: z.string(),
      zircon: z.strictObject({ 'watson-harrison-1983': zircon, 'boehnke-2013': zircon, 'shao-2020': zircon }),
      apatite: z.strictObject({ ...from, ...ranged, a: number, b: number, c: number, d: number, inApatite: number }),
    }),
  ),
);
