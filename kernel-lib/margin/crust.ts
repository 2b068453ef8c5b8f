import { z } from 'zod';
import { once, readJsonTable, standings, type Standing } from '../tables';

const standing = z.enum(standings);
const termSchema = z.strictObject({
  of: z.string(),
  function: z.enum(['value', 'ln']),
  coefficient: z.number(),
  coefficientError: z.number().optional(),
  inside: z.number(),
});
const tableSchema = z.strictObject({
  note: z.string(),
  filters: z.record(
    z.string(),
    z.strictObject({
      name: z.string(),
      outliers: z.literal('modified Thompson tau'),
      source: z.string(),
      standing,
      note: z.string().optional(),
      ranges: z.array(
        z.strictObject({
          of: z.string(),
          unit: z.string(),
          from: z.number().optional(),
          to: z.number().optional(),
          optional: z.boolean().optional(),
        }),
      ),
    }),
  ),
  calibrations: z.array(
    z.strictObject({
      key: z.string(),
      name: z.string(),
      setting: z.enum(['arc', 'collision']),
      filter: z.string(),
      statistic: z.enum(['median', 'maximum']),
      chondrite: z.string().optional(),
      constant: z.number(),
      constantError: z.number().optional(),
      terms: z.array(termSchema),
      uncertainty: z.number().optional(),
      uncertaintyStanding: standing.optional(),
      sources: z.array(z.string()),
      standing,
      cautions: z.array(z.string()),
    }),
  ),
  cautions: z.array(z.strictObject({ text: z.string(), source: z.string(), standing })),
});

/** One published calibration of crustal thickness: H = constant + Σ coefficient × f(inside × ratio), km. */
export interface CrustCalibration {
  readonly key: string;
  readonly name: string;
  readonly setting: 'arc' | 'collision';
  /** Key of the sample filter that it was made with. */
  readonly filter: string;
  readonly statistic: 'median' | 'maximum';
  /** Chondrite that (La/Yb)N is normalised to. */
  readonly chondrite?: string;
  readonly constant: number;
  readonly constantError?: number;
  readonly terms: readonly {
    readonly of: string;
    readonly function: 'value' | 'ln';
    readonly coefficient: number;
    readonly coefficientError?: number;
    readonly inside: number;
  }[];
  /** Stated uncertainty of a thickness, km; undefined where it is not recorded here. */
  readonly uncertainty?: number;
  readonly uncertaintyStanding?: Standing;
  readonly sources: readonly string[];
  readonly standing: Standing;
  readonly cautions: readonly string[];
}

/** A sample filter: ranges that a sample must lie in. */
export interface CrustFilter {
  readonly name: string;
  readonly ranges: readonly {
    readonly of: string;
    readonly unit: string;
    readonly from?: number;
    readonly to?: number;
    readonly optional?: boolean;
  }[];
  readonly outliers: 'modified Thompson tau';
  readonly source: string;
  readonly standing: Standing;
  readonly note?: string;
}

const table = once(() => readJsonTable('crustal-thickness.json', tableSchema));

/** Every calibration of reference-tables/crustal-thickness.json, by key. */
export function crustCalibrations(): ReadonlyMap<string, CrustCalibration> {
  return new Map(table().calibrations.map((each): [string, CrustCalibration] => [each.key, each]));
}

/** @internal */
export function crustFilter(key: string): CrustFilter {
  return table().filters[key];
}

/** @internal */
export function crustCautions(): readonly { readonly text: string; readonly source: string; readonly standing: Standing }[] {
  return table().cautions;
}

/**
 * Thickness of the crust (km) that one calibration gives for ratios. For suites use `crustalThickness`, which filters, takes medians and warns.
 *
 * @param key of reference-tables/crustal-thickness.json
 * @param ratios by name: `Sr/Y`, `(La/Yb)N`, `Ce/Y`
 * @throws RangeError for an unknown key, or a ratio that is lacking or not above zero
 * @example thicknessFromRatios('arc-sr-y-2015', { 'Sr/Y': 20 }) // 30.25
 */
export function thicknessFromRatios(key: string, ratios: Readonly<Record<string, number>>): number {
  const calibration = crustCalibrations().get(key);
  if (calibration === undefined)
    throw new RangeError(`thicknessFromRatios: there is no calibration "${key}". Known: ${[...crustCalibrations().keys()].join(', ')}.`);
  let thickness = calibration.constant;
  for (const { of, function: f, coefficient, inside } of calibration.terms) {
    const ratio = ratios?.[of];
    if (!(ratio > 0)) throw new RangeError(`thicknessFromRatios: "${key}" needs ${of} as a number above zero, not ${String(ratio)}.`);
    thickness += coefficient * (f === 'ln' ? Math.log(inside * ratio) : inside * ratio);
  }
  return thickness;
}
