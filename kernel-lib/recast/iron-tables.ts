import { z } from 'zod';
import { once, readJsonTable, standings } from '../tables';

const number = z.number();
const about = { what: z.string(), source: z.string(), standing: z.enum(standings) };
const buffer = z.strictObject({ A: number, B: number, C: number });

const schema = z.strictObject({
  note: z.string(),
  silicaAndAlkalis: z.strictObject({ ...about, constant: number, perSilica: number, perAlkalis: number }),
  ratioByField: z.strictObject({ ...about, ratios: z.record(z.string(), number) }),
  meltEquilibrium: z.strictObject({
    ...about,
    a: number,
    b: number,
    c: number,
    d: z.record(z.string(), number),
    e: number,
    f: number,
    g: number,
    h: number,
    T0: number,
  }),
  buffers: z.strictObject({ ...about, FMQ: buffer, NNO: buffer, IW: buffer }),
});

/** @internal Published constants of reference-tables/iron-oxidation.json. */
export const ironTables = once(() => readJsonTable('iron-oxidation.json', schema));
