import { z } from 'zod';
import { once, readJsonTable, type Standing, standings } from '../tables';

/** A range that a quantity at convergent margins usually falls in. */
export interface PlausibleRange {
  readonly key: string;
  readonly name: string;
  readonly unit: string;
  readonly from: number;
  readonly to: number;
  readonly source: string;
  readonly standing: Standing;
  /** What a value below, or above, the range is a sign of. */
  readonly below?: string;
  readonly above?: string;
  readonly note?: string;
}

const tableSchema = z.strictObject({
  note: z.string(),
  ranges: z.array(
    z.strictObject({
      key: z.string(),
      name: z.string(),
      unit: z.string(),
      from: z.number(),
      to: z.number(),
      source: z.string(),
      standing: z.enum(standings),
      below: z.string().optional(),
      above: z.string().optional(),
      note: z.string().optional(),
    }),
  ),
});

const all = once(
  (): ReadonlyMap<string, PlausibleRange> => new Map(readJsonTable('plausible-ranges.json', tableSchema).ranges.map((range) => [range.key, range])),
);

/** Every range of reference-tables/plausible-ranges.json, by key. Common practice: a value outside is allowed, and pointed out. */
export function plausibleRanges(): ReadonlyMap<string, PlausibleRange> {
  return all();
}

/**
 * What there is to point out about a value, or undefined when it is as usual (or NaN).
 *
 * @param key of reference-tables/plausible-ranges.json
 * @param value in the range's unit
 * @throws RangeError for an unknown key
 * @example pointOut('slab-dip', 68) // 'slab dip 68° is above the usual 25–45° (common practice): a steep slab'
 */
export function pointOut(key: string, value: number): string | undefined {
  const range = all().get(key);
  if (range === undefined) throw new RangeError(`pointOut: there is no range "${key}". Known: ${[...all().keys()].join(', ')}.`);
  if (!(value < range.from || value > range.to)) return undefined;
  const unit = range.unit === '°' ? '°' : ` ${range.unit}`;
  const sign = value < range.from ? range.below : range.above;
  const text = Math.abs(value) >= 10 ? value.toFixed(0) : value.toPrecision(2);
  return (
    `${range.name} ${text}${unit} is ${value < range.from ? 'below' : 'above'} the usual ${range.from}–${range.to}${unit} (common ` +
    `practice)${sign === undefined ? '' : `: ${sign}`}`
  );
}
