import { z } from 'zod';
import { once, readJsonTable, standings } from '../tables';

const number = z.number();
const about = { source: z.string(), standing: z.enum(standings), confidence: z.string().optional(), text: z.string() };
const pair = z.tuple([z.string(), z.string()]);

const schema = z.strictObject({
  note: z.string(),
  volatiles: z.strictObject({ ...about, waterAbove: number, carbonDioxideAbove: number }),
  boninite: z.strictObject({ ...about, silicaAbove: number, magnesiaAbove: number, titaniaBelow: number }),
  komatiite: z.strictObject({ ...about, silicaFrom: number, silicaTo: number, magnesiaAbove: number, alkalisBelow: number, titania: number }),
  picrite: z.strictObject({ ...about, silicaFrom: number, silicaTo: number, magnesiaAbove: number, alkalisBelow: number }),
  sodic: z.strictObject({ ...about, offset: number, names: z.strictObject({ S1: pair, S2: pair, S3: pair }) }),
  basanite: z.strictObject({ ...about, olivineAbove: number }),
  nephelinite: z.strictObject({ ...about, nephelineAbove: number, albiteBelow: number }),
  trachyte: z.strictObject({ ...about, quartzAbove: number }),
  basalt: z.strictObject(about),
  peralkaline: z.strictObject({ ...about, above: number, perIron: number, constant: number }),
  potassium: z.strictObject({ ...about, fields: z.array(z.string()) }),
});

/** @internal The IUGS naming rules of reference-tables/naming-rules.json. */
export const namingRules = once(() => readJsonTable('naming-rules.json', schema));

/** The rules, by the name they have in a chain. */
export type NamingRule =
  'volatiles' | 'boninite' | 'komatiite' | 'picrite' | 'sodic' | 'basanite' | 'nephelinite' | 'trachyte' | 'basalt' | 'peralkaline' | 'potassium';
