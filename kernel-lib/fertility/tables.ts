import { z } from 'zod';
import { once, readJsonTable, standings, type Standing } from '../tables';
import { quantityFormula } from '../tracers';

/** The comparison of a condition. */
export type FertilityComparison = '>' | '>=' | '<' | '<=';

/** One test on a sample: an expression, a comparison, and a limit that is a number or an expression (a line over silica). */
export interface FertilityCondition {
  readonly expression: string;
  readonly is: FertilityComparison;
  readonly limit: string;
}

/** The silica range (wt %) in which a criterion may be asked: `over`/`below` leave the end out, `from`/`to` include it. */
export interface SilicaWindow {
  readonly over?: number;
  readonly from?: number;
  readonly below?: number;
  readonly to?: number;
}

/** One indicator of reference-tables/fertility/indicators.json. */
export interface FertilityIndicator {
  readonly key: string;
  readonly name: string;
  /** `criterion` gives verdicts; `shown` gives values only; `trend` is read on a whole group. */
  readonly kind: 'criterion' | 'shown' | 'trend';
  /** Indicators of one family repeat each other's evidence; those with a default weight stand in families that share no element. */
  readonly family: string;
  readonly expression: string;
  readonly against?: string;
  readonly towards?: 'rising' | 'falling';
  readonly rising?: string;
  readonly falling?: string;
  readonly flat?: string;
  /** All must hold (criteria only). */
  readonly conditions: readonly FertilityCondition[];
  readonly basis: 'volatile-free' | 'as given';
  readonly silica: SilicaWindow;
  /** Where the silica window comes from. */
  readonly window: 'published' | 'own convention';
  /** Elements of the indicator that move in alteration. */
  readonly mobile: readonly string[];
  /** What an altered or weathered sample means for it. */
  readonly onAltered: 'strike' | 'count';
  readonly source: string;
  readonly standing: Standing;
  /** Limits of use, in words. */
  readonly limits: string;
}

/** One guard of reference-tables/fertility/guards.json. */
export interface FertilityGuard {
  readonly key: string;
  readonly name: string;
  readonly kind: 'alteration' | 'weathering' | 'cumulate' | 'total';
  readonly effect: 'strike' | 'exclude' | 'caution';
  /** A label that flags the sample by holding any text. */
  readonly label?: string;
  readonly conditions: readonly FertilityCondition[];
  readonly basis: 'volatile-free' | 'as given';
  readonly source: string;
  readonly standing: Standing;
  readonly note: string;
}

/** One row of the weights table. */
export interface FertilityWeight {
  readonly indicator: string;
  readonly weight: number;
  readonly why: string;
}

const text = z.string().trim().min(1);
const condition = z.strictObject({ expression: text, is: z.enum(['>', '>=', '<', '<=']), limit: text });
const basis = z.enum(['volatile-free', 'as given']).default('volatile-free');
const silica = z.strictObject({ over: z.number().optional(), from: z.number().optional(), below: z.number().optional(), to: z.number().optional() });

const indicatorSchema = z
  .strictObject({
    key: z.string().regex(/^[a-z0-9-]+$/, 'a key is lower case letters, digits and -'),
    name: text,
    kind: z.enum(['criterion', 'shown', 'trend']),
    family: text,
    expression: text,
    against: text.optional(),
    towards: z.enum(['rising', 'falling']).optional(),
    rising: text.optional(),
    falling: text.optional(),
    flat: text.optional(),
    conditions: z.array(condition).default([]),
    basis,
    silica,
    window: z.enum(['published', 'own convention']),
    mobile: z.array(text),
    onAltered: z.enum(['strike', 'count']),
    source: text,
    standing: z.enum(standings),
    limits: text,
  })
  .check(({ value, issues }) => {
    if ((value.kind === 'criterion') !== value.conditions.length > 0)
      issues.push({ code: 'custom', input: value, message: `${value.key}: a criterion has conditions, and nothing else has` });
    if ((value.kind === 'trend') !== (value.against !== undefined))
      issues.push({ code: 'custom', input: value, message: `${value.key}: a trend has "against", and nothing else has` });
  });

const indicatorsSchema = z.strictObject({ about: text, reference: text, indicators: z.array(indicatorSchema) });

const guardsSchema = z.strictObject({
  about: text,
  guards: z.array(
    z.strictObject({
      key: text,
      name: text,
      kind: z.enum(['alteration', 'weathering', 'cumulate', 'total']),
      effect: z.enum(['strike', 'exclude', 'caution']),
      label: text.optional(),
      conditions: z.array(condition).default([]),
      basis,
      source: z.string(),
      standing: z.enum(standings),
      note: text,
    }),
  ),
});

const weightsSchema = z.strictObject({ about: text, weights: z.array(z.strictObject({ indicator: text, weight: z.number().min(0), why: text })) });

/** @internal Paths of the tables, for lineage. */
export const fertilityTables = ['fertility/indicators.json', 'fertility/guards.json', 'fertility/weights.json'] as const;

const indicatorTable = once(() => readJsonTable(fertilityTables[0], indicatorsSchema));
const guardTable = once(() => readJsonTable(fertilityTables[1], guardsSchema));
const weightTable = once(() => readJsonTable(fertilityTables[2], weightsSchema));

/** @internal Named expressions and the reference composition that the tables use. */
export function indicatorLanguage(): { readonly named: Readonly<Record<string, string>>; readonly reference: string } {
  return language();
}

// One object for good, so that expressions are parsed once.
const language = once(() => ({ named: { 'Eu/Eu*': quantityFormula('Eu/Eu*').formula }, reference: indicatorTable().reference }));

/**
 * The screening indicators, in the table's order: published whole-rock criteria with their silica window, source, standing and limits of
 * use; values without a published cut-off, which are shown and give no verdict; and trends of a whole group. Zircon indices are not
 * whole-rock criteria and are left out.
 *
 * @source the works in each entry's `source`
 * @example fertilityIndicators().map(({ key, name }) => `${key}: ${name}`)
 */
export function fertilityIndicators(): readonly FertilityIndicator[] {
  return indicatorTable().indicators;
}

/** The guards, in the table's order: what makes a sample unfit for a criterion, with source, standing and effect. */
export function fertilityGuards(): readonly FertilityGuard[] {
  return guardTable().guards;
}

/** The default weights of the evidence score, with the reason for each. Indicators that are not named here weigh nothing. */
export function fertilityWeights(): readonly FertilityWeight[] {
  return weightTable().weights;
}

/** @internal Conditions in words, as the sources sheet and the lineage give them. */
export function conditionsText({ conditions }: { readonly conditions: readonly FertilityCondition[] }): string {
  return conditions.map(({ expression, is, limit }) => `${expression} ${is} ${limit}`).join('; ');
}
