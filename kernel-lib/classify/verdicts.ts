import { formatNumber, showAs, type Showable, type TableCell } from '../display';
import type { Column, Step, Suite } from '../suite';
import type { FieldProbabilities } from './probability';
import type { Scheme, SchemeCriterion } from './scheme';

/** How one criterion of a list came out, sample by sample: 1 met, 0 not met, −1 not known. */
export interface CriterionOutcome {
  readonly criterion: SchemeCriterion;
  readonly met: Int8Array;
  /** The values it was asked of (n); undefined where the suite lacks them. */
  readonly values?: Float64Array;
}

/** What one scheme says about every sample (n). */
export interface SchemeVerdict {
  readonly scheme: Scheme;
  /** Index into `scheme.fields` (n); −1 where there is none, and `remarks` says why. */
  readonly field: Int16Array;
  /** Symbol of the field (n); '' where there is none. */
  readonly symbols: readonly string[];
  /** Name of the field (n); '' where there is none. */
  readonly names: readonly string[];
  /** Distance to the nearest boundary of the field (n; axis units, logarithms on log axes, per cent in a triangle); NaN where there is none. */
  readonly distance: Float64Array;
  /** Why there is no field, or what to mind about it (n); '' where there is nothing to say. */
  readonly remarks: readonly string[];
  /** The values the scheme asked: x and y in axis units, per cent of the first two corners for a triangle; undefined where the suite lacks them. */
  readonly x?: Column;
  readonly y?: Column;
  /** For lists of criteria: each criterion apart. */
  readonly criteria: readonly CriterionOutcome[];
  /** Probability of each field, where 1σ is known or given. */
  readonly probability?: FieldProbabilities;
}

/** The verdicts of several schemes on one suite. */
export interface Verdicts extends Showable {
  readonly suite: Suite;
  /** By scheme key, in the order asked. */
  readonly schemes: ReadonlyMap<string, SchemeVerdict>;
  readonly lineage: readonly Step[];
}

/** @internal Makes the result showable: a row a sample. */
export function verdictsOf(suite: Suite, schemes: ReadonlyMap<string, SchemeVerdict>, lineage: readonly Step[]): Verdicts {
  return showAs({ suite, schemes, lineage }, () => verdictTable(suite, schemes));
}

/** Rows made for a shown table; more are only counted. */
const rowsShown = 60;

function verdictTable(suite: Suite, schemes: ReadonlyMap<string, SchemeVerdict>) {
  const all = [...schemes.values()];
  const columns = [
    'sample',
    ...all.flatMap(({ scheme, probability }) => [
      scheme.key,
      ...(probability === undefined ? [] : [`${scheme.key}: how sure`]),
      'distance',
      'remark',
    ]),
  ];
  const rows = Array.from({ length: Math.min(suite.size, rowsShown) }, (_, i): TableCell[] => [
    suite.samples[i],
    ...all.flatMap((verdict): TableCell[] => [
      verdict.field[i] < 0 ? 'not determined' : fieldText(verdict, i),
      ...(verdict.probability === undefined ? [] : [probabilityText(verdict, i)]),
      Number.isNaN(verdict.distance[i]) ? null : formatNumber(Number(verdict.distance[i].toPrecision(3))),
      verdict.remarks[i],
    ]),
  ]);
  const notes = all.map(({ scheme, field }) => {
    const determined = field.reduce((count, each) => count + (each >= 0 ? 1 : 0), 0);
    return `${scheme.key}: ${scheme.title}; ${determined} of ${suite.size} determined.`;
  });
  notes.push('Distance in axis units; a point on a boundary belongs to the field of higher x.');
  return { title: 'Verdicts', columns, rows, totalRows: suite.size, notes };
}

function fieldText({ symbols, names, scheme }: SchemeVerdict, i: number): string {
  return scheme.kind === 'polygons' && symbols[i] !== names[i] ? `${symbols[i]} ${names[i]}` : names[i];
}

/** The likely fields of one sample in words: `andesite 71 %, basaltic andesite 29 %`; fields below 0.5 % are not named. */
export function probabilityText(verdict: SchemeVerdict, row: number): string {
  const { probability, scheme } = verdict;
  if (probability === undefined) return '';
  const shares = scheme.fields
    .map(({ name }, k) => ({ name, share: probability.values[k][row] }))
    .filter(({ share }) => share >= 0.005)
    .sort((a, b) => b.share - a.share);
  return shares.map(({ name, share }) => `${name} ${share > 0.995 && shares.length === 1 ? '> 99' : (100 * share).toFixed(0)} %`).join(', ');
}

/**
 * One scheme's verdict.
 *
 * @throws RangeError when the scheme was not asked
 */
export function verdictOf(verdicts: Verdicts, key: string): SchemeVerdict {
  const found = verdicts.schemes.get(key);
  if (found === undefined) throw new RangeError(`The scheme "${key}" was not asked. Asked: ${[...verdicts.schemes.keys()].join(', ')}.`);
  return found;
}
