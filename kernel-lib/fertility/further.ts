import { cellState } from '../suite';
import type { IndicatorAnswers } from './answers';
import { fertilityVerdict } from './codes';
import type { Grounds } from './ground';
import { scoreGroup, type GroupVerdict, type Weighted } from './score';
import { shareOf, type IndicatorTally, type IntervalChoice } from './tally';

/** What would follow from a further measurement: criteria asked before come out as so far, new ones at one of their two extremes. */
export interface FurtherOutcome {
  readonly if: 'as so far' | 'all met' | 'none met';
  readonly verdict: GroupVerdict;
}

/** The smallest further measurement that could settle an undecided group. */
export interface FurtherMeasurement {
  /** Keys of the criteria it serves. */
  readonly indicators: readonly string[];
  /** What to measure, e.g. ['Sc']. */
  readonly analytes: readonly string[];
  readonly samples: number;
  /** Whether samples in hand suffice, or new fresh ones are needed. */
  readonly on: 'samples in hand' | 'new samples';
  /** How many samples in hand lack just this. */
  readonly available: number;
  readonly outcomes: readonly FurtherOutcome[];
  readonly text: string;
}

/** Beyond this many new samples the answer is "many more", which no explorer orders on a score's word. */
const mostNewSamples = 60;

/** Some criteria (by number) that a measurement would answer, and how many samples in hand lack just that. */
interface Candidate {
  readonly criteria: readonly number[];
  readonly analytes: readonly string[];
  readonly available: number;
}

interface GroupState {
  readonly tallies: readonly IndicatorTally[];
  readonly weighted: readonly Weighted[];
  readonly cut: number;
  readonly interval: IntervalChoice;
}

/** @internal Looks for the fewest measurements that could settle the verdict of one group; samples in hand before new ones. */
export function furtherMeasurement(
  group: GroupState,
  answers: readonly IndicatorAnswers[],
  rows: Int32Array,
  grounds: Grounds,
): FurtherMeasurement | undefined {
  const { tallies, weighted, cut } = group;
  // More of a criterion that is clear of the cut already would settle nothing but its own case.
  const open = weighted.flatMap(({ weight }, k) => (weight > 0 && tallies[k].low <= cut && tallies[k].high >= cut ? [k] : []));
  const inHand = open.flatMap((k) => candidatesInHand(k, weighted[k], answers[k], rows, grounds));
  const best = fewest(inHand.map((candidate) => settle(candidate, candidate.available, 'samples in hand', group)));
  if (best !== undefined || open.length === 0) return best;
  const analytes = (of: readonly number[]) => [...new Set(of.flatMap((k) => analytesOf(weighted[k], grounds)))].filter((symbol) => symbol !== 'SiO2');
  // A new sample may be analysed for one criterion, or for all that are open.
  const anew = [...open.map((k) => [k]), ...(open.length > 1 ? [open] : [])];
  return fewest(anew.map((criteria) => settle({ criteria, analytes: analytes(criteria), available: 0 }, mostNewSamples, 'new samples', group)));
}

function fewest(found: readonly (FurtherMeasurement | undefined)[]): FurtherMeasurement | undefined {
  return found.reduce((best, next) => (next !== undefined && (best === undefined || next.samples < best.samples) ? next : best), undefined);
}

const readerOf = ({ indicator }: Weighted, grounds: Grounds) => (indicator.basis === 'as given' ? grounds.asGiven : grounds.volatileFree);

function analytesOf(of: Weighted, grounds: Grounds): string[] {
  const reader = readerOf(of, grounds);
  return [...new Set(of.indicator.conditions.flatMap(({ expression, limit }) => [...reader.symbols(expression), ...reader.symbols(limit)]))];
}

/** What the samples that could otherwise be asked are lacking, and how many lack just that. */
function candidatesInHand(k: number, of: Weighted, answers: IndicatorAnswers, rows: Int32Array, grounds: Grounds): Candidate[] {
  const operands = analytesOf(of, grounds).map((symbol) => [symbol, readerOf(of, grounds).column(symbol)] as const);
  const lacking = new Map<string, number>();
  for (const row of rows) {
    if (answers.verdicts[row] !== fertilityVerdict.notMeasured) continue;
    const missing = operands
      .filter(([, column]) => column === undefined || column.states[row] === cellState.missing)
      .map(([symbol]) => symbol)
      .join(' ');
    if (missing !== '') lacking.set(missing, (lacking.get(missing) ?? 0) + 1);
  }
  return [...lacking].map(([missing, available]) => ({ criteria: [k], analytes: missing.split(' '), available }));
}

function settle(
  { criteria, analytes, available }: Candidate,
  most: number,
  on: FurtherMeasurement['on'],
  group: GroupState,
): FurtherMeasurement | undefined {
  const { tallies, weighted } = group;
  const conditions: FurtherOutcome['if'][] = criteria.every((k) => tallies[k].asked > 0) ? ['as so far'] : ['all met', 'none met'];
  const outcomesOf = (n: number) =>
    conditions.map((condition): FurtherOutcome => ({ if: condition, verdict: verdictWith(n, condition, criteria, group) }));
  const settles = (outcomes: readonly FurtherOutcome[]) => outcomes.some(({ verdict }) => verdict === 'supported' || verdict === 'not supported');
  // Intervals narrow with every sample: what all of them cannot settle, fewer cannot.
  if (most < 1 || !settles(outcomesOf(most))) return undefined;
  for (let n = 1; n <= most; n++) {
    const outcomes = outcomesOf(n);
    if (!settles(outcomes)) continue;
    const what = analytes.length > 1 ? `${analytes.slice(0, -1).join(', ')} and ${analytes.at(-1)}` : analytes[0];
    const where =
      on === 'samples in hand'
        ? `${n} of ${available} samples that lack ${analytes.length > 1 ? 'them' : 'it'}`
        : `${n} new fresh sample${n === 1 ? '' : 's'} in the silica window`;
    const names = criteria.map((k) => weighted[k].indicator.name).join('; ');
    return {
      indicators: criteria.map((k) => weighted[k].indicator.key),
      analytes,
      samples: n,
      on,
      available,
      outcomes,
      text: `${what} on ${where} (${names}: ${outcomes.map((each) => `${each.if} → ${each.verdict}`).join('; ')})`,
    };
  }
  return undefined;
}

/** The verdict after n more answers to each of some criteria. */
function verdictWith(
  n: number,
  condition: FurtherOutcome['if'],
  criteria: readonly number[],
  { tallies, weighted, cut, interval }: GroupState,
): GroupVerdict {
  const changed = tallies.map((tally, k) => {
    if (!criteria.includes(k)) return tally;
    const met = tally.asked > 0 ? Math.round(n * tally.share) : condition === 'all met' ? n : 0;
    return { ...tally, ...shareOf(tally.met + met, tally.near, tally.notMet + n - met, interval) };
  });
  return scoreGroup(changed, weighted, cut).verdict;
}
