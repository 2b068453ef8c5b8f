import type { Suite } from '../suite';
import type { IndicatorAnswers } from './answers';
import { proportionInterval, type ProportionMethod } from './binomial';
import { fertilityVerdict } from './codes';

/** @internal Which group every sample belongs to. */
export interface Grouping {
  readonly label: string;
  readonly names: readonly string[];
  /** n; the group's number, −1 for a sample without that label. */
  readonly of: Int32Array;
  readonly rows: readonly Int32Array[];
}

/** @internal Numbers the groups of a label in order of first appearance. */
export function groupingOf(suite: Suite, label: string): Grouping {
  const texts = suite.label(label);
  const numbers = new Map<string, number>();
  const of = new Int32Array(suite.size);
  const counts: number[] = [];
  for (let i = 0; i < of.length; i++) {
    const text = texts[i];
    if (text === '') {
      of[i] = -1;
      continue;
    }
    let group = numbers.get(text);
    if (group === undefined) {
      numbers.set(text, (group = numbers.size));
      counts.push(0);
    }
    of[i] = group;
    counts[group]++;
  }
  const rows = counts.map((count) => new Int32Array(count));
  const filled = new Int32Array(counts.length);
  for (let i = 0; i < of.length; i++) if (of[i] >= 0) rows[of[i]][filled[of[i]]++] = i;
  return { label, names: [...numbers.keys()], of, rows };
}

/** What one criterion found in one group. */
export interface IndicatorTally {
  readonly indicator: string;
  readonly met: number;
  readonly near: number;
  readonly notMet: number;
  /** met + near + not met: the samples that could be asked. */
  readonly asked: number;
  /** (met + near/2) / asked; NaN when none could be asked. */
  readonly share: number;
  /** Binomial interval of the share: the low end counts near as not met, the high end counts near as met. 0 to 1 when none was asked. */
  readonly low: number;
  readonly high: number;
  /** Silica outside, bound undecided, guarded: not asked. */
  readonly notApplicable: number;
  /** Of those, struck out or taken out by a guard. */
  readonly guarded: number;
  readonly notMeasured: number;
}

/** @internal How the interval of a share is made. */
export interface IntervalChoice {
  readonly method: ProportionMethod;
  readonly confidence: number;
}

/** @internal The share met and its interval. */
export function shareOf(
  met: number,
  near: number,
  notMet: number,
  interval: IntervalChoice,
): { asked: number; share: number; low: number; high: number } {
  const asked = met + near + notMet;
  if (asked === 0) return { asked, share: NaN, low: 0, high: 1 };
  return {
    asked,
    share: (met + near / 2) / asked,
    low: proportionInterval(met, asked, interval).low,
    high: proportionInterval(met + near, asked, interval).high,
  };
}

/** @internal Counts of one criterion in every group: one entry a group. */
export function tallyByGroup(answers: IndicatorAnswers, grouping: Grouping, interval: IntervalChoice): IndicatorTally[] {
  const groups = grouping.names.length;
  const kinds = 5;
  const counts = new Int32Array(groups * kinds);
  const guarded = new Int32Array(groups);
  const { verdicts, reasons } = answers;
  const { of } = grouping;
  for (let i = 0; i < of.length; i++) {
    if (of[i] < 0) continue;
    counts[of[i] * kinds + verdicts[i]]++;
    if (verdicts[i] === fertilityVerdict.notApplicable && isGuarded(reasons[i])) guarded[of[i]]++;
  }
  return Array.from({ length: groups }, (_, group) => {
    const count = (verdict: number) => counts[group * kinds + verdict];
    const [met, near, notMet] = [count(fertilityVerdict.met), count(fertilityVerdict.near), count(fertilityVerdict.notMet)];
    return {
      indicator: answers.indicator.key,
      met,
      near,
      notMet,
      ...shareOf(met, near, notMet, interval),
      notApplicable: count(fertilityVerdict.notApplicable),
      guarded: guarded[group],
      notMeasured: count(fertilityVerdict.notMeasured),
    };
  });
}

function isGuarded(reason: number): boolean {
  return reason >= 3 && reason <= 6;
}
