import type { Suite } from '../suite';
import { askIndicator, type IndicatorAnswers } from './answers';
import { groundsOf, type FertilityBasis, type Grounds } from './ground';
import { guardSamples, type Guarding } from './guard-flags';
import { groupingOf, tallyByGroup, type Grouping, type IndicatorTally, type IntervalChoice } from './tally';
import type { FertilityIndicator } from './tables';

/** @internal Everything that was asked of a suite, before any weight comes in. */
export interface Evidence {
  readonly grounds: Grounds;
  readonly guarding: Guarding;
  /** All indicators, in order. */
  readonly answers: readonly IndicatorAnswers[];
  readonly grouping: Grouping;
  /** The criteria among the indicators, in order. */
  readonly criteria: readonly IndicatorAnswers[];
  /** By group, then by criterion. */
  readonly tallies: readonly (readonly IndicatorTally[])[];
}

/** @internal Asks every indicator of every sample and counts the answers by group. */
export function gatherEvidence(
  suite: Suite,
  label: string,
  indicators: readonly FertilityIndicator[],
  basis: FertilityBasis,
  interval: IntervalChoice,
): Evidence {
  const grounds = groundsOf(suite, basis);
  const guarding = guardSamples(grounds);
  const answers = indicators.map((indicator) => askIndicator(indicator, grounds, guarding));
  const grouping = groupingOf(suite, label);
  const criteria = answers.filter(({ indicator }) => indicator.kind === 'criterion');
  const byCriterion = criteria.map((each) => tallyByGroup(each, grouping, interval));
  const tallies = grouping.names.map((_, group) => byCriterion.map((each) => each[group]));
  return { grounds, guarding, answers, grouping, criteria, tallies };
}
