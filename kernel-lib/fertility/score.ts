import type { IndicatorTally } from './tally';
import type { FertilityIndicator } from './tables';

/** What one family of indicators says of a group: for, against, or open (its interval spans the cut). */
export interface FamilyStance {
  readonly family: string;
  readonly stance: 'for' | 'against' | 'open';
  readonly share: number;
  readonly low: number;
  readonly high: number;
}

/** The verdict on a group. */
export type GroupVerdict = 'supported' | 'undecided' | 'not supported' | 'cannot be asked';

/** The evidence score of a group: a weighted mean of shares met, with the same mean of their intervals. */
export interface EvidenceScore {
  /** 0–1; NaN when no weighted criterion could be asked. */
  readonly score: number;
  readonly low: number;
  readonly high: number;
  readonly families: readonly FamilyStance[];
  readonly agreement: 'agree' | 'disagree' | 'one line only' | 'open' | 'none';
  readonly verdict: GroupVerdict;
  readonly because: string;
}

/** @internal A criterion with its weight, in the order of the tallies. */
export interface Weighted {
  readonly indicator: FertilityIndicator;
  readonly weight: number;
}

/**
 * @internal The score and verdict of one group. A weighted criterion that could be asked of no sample is left out of the mean.
 *
 * @param tallies one for each of `weighted`
 */
export function scoreGroup(tallies: readonly IndicatorTally[], weighted: readonly Weighted[], cut: number): EvidenceScore {
  let sum = 0;
  let score = 0;
  let low = 0;
  let high = 0;
  const byFamily = new Map<string, { weight: number; share: number; low: number; high: number }>();
  for (let k = 0; k < weighted.length; k++) {
    const { weight, indicator } = weighted[k];
    const tally = tallies[k];
    if (weight === 0 || tally.asked === 0) continue;
    sum += weight;
    score += weight * tally.share;
    low += weight * tally.low;
    high += weight * tally.high;
    let family = byFamily.get(indicator.family);
    if (family === undefined) byFamily.set(indicator.family, (family = { weight: 0, share: 0, low: 0, high: 0 }));
    family.weight += weight;
    family.share += weight * tally.share;
    family.low += weight * tally.low;
    family.high += weight * tally.high;
  }
  if (sum === 0)
    return {
      score: NaN,
      low: 0,
      high: 1,
      families: [],
      agreement: 'none',
      verdict: 'cannot be asked',
      because: 'no sample could be asked a weighted criterion',
    };
  const families = [...byFamily].map(([family, total]): FamilyStance => {
    const ends = { share: total.share / total.weight, low: total.low / total.weight, high: total.high / total.weight };
    return { family, stance: ends.low > cut ? 'for' : ends.high < cut ? 'against' : 'open', ...ends };
  });
  const ends = { score: score / sum, low: low / sum, high: high / sum };
  const agreement = agreementOf(families);
  return { ...ends, families, agreement, ...verdictOf(ends, families, agreement, cut) };
}

function agreementOf(families: readonly FamilyStance[]): EvidenceScore['agreement'] {
  const speaking = families.filter(({ stance }) => stance !== 'open');
  if (families.length === 1) return 'one line only';
  if (speaking.length < 2) return 'open';
  return speaking.every(({ stance }) => stance === speaking[0].stance) ? 'agree' : 'disagree';
}

function verdictOf(
  ends: { readonly low: number; readonly high: number },
  families: readonly FamilyStance[],
  agreement: EvidenceScore['agreement'],
  cut: number,
): { verdict: GroupVerdict; because: string } {
  if (ends.high < cut) {
    return {
      verdict: 'not supported',
      because: families.length === 1 ? `one line of evidence (${families[0].family}), against` : 'the whole interval lies below the cut',
    };
  }
  if (ends.low <= cut)
    return { verdict: 'undecided', because: agreement === 'disagree' ? 'independent lines disagree' : 'the interval spans the cut' };
  if (agreement === 'one line only') return { verdict: 'undecided', because: `one line of evidence only (${families[0].family})` };
  if (families.some(({ stance }) => stance === 'against')) return { verdict: 'undecided', because: 'independent lines disagree' };
  if (families.filter(({ stance }) => stance === 'for').length < 2)
    return { verdict: 'undecided', because: 'only one line of evidence is clear of the cut' };
  return { verdict: 'supported', because: 'the whole interval lies above the cut and independent lines agree' };
}
