import { cellState } from '../suite';
import type { IndicatorAnswers } from './answers';
import { fertilityVerdict } from './codes';
import type { Grounds } from './ground';
import { scoreGroup, type GroupVerdict, type Weighted } from './score';
import { shareOf, type IndicatorTally, type IntervalChoice } from './tally';

/** The smallest further measurement that could settle an undecided group. */
export interface FurtherMeasurement {
  readonly indicator: string;
  /** What to measure, e.g. ['Sc']. */
  readonly analytes: readonly string[];
  readonly samples: number;
  /** Whether samples in hand suffice, or new fresh ones are needed. */
  readonly on: 'samples in hand' | 'new samples';
  /** How many samples in hand lack just this. */
  readonly available: number;
  /** The verdicts that would follow. A criterion that was asked before is taken to come out as so far; a new one at its two extremes. */
  readonly outcomes: readonly { readonly if: 'as so far' | 'all met' | 'none met'; readonly verdict: GroupVerdict }[];
  readonly text: string;
}

/** Beyond this many new samples the answer is "many more", which no explorer orders on a score's word. */
const mostNewSamples = 60;

interface Candidate {
  readonly k: number;
  readonly analytes: readonly string[];
  readonly available: number;
}

/** @internal Looks for the fewest measurements that could settle the verdict of one group. */
export function furtherMeasurement(
  tallies: readonly IndicatorTally[],
  weighted: readonly Weighted[],
  answers: readonly IndicatorAnswers[],
  rows: Int32Array,
  grounds: Grounds,
  settings: { readonly cut: number; readonly interval: IntervalChoice },
): FurtherMeasurement | undefined {
  let best: FurtherMeasurement | undefined;
  // More of a criterion that is clear of the cut already would settle nothing but its own case.
  const open = weighted.map(({ weight }, k) => weight > 0 && tallies[k].low <= settings.cut && tallies[k].high >= settings.cut);
  for (const candidate of candidatesInHand(weighted, answers, rows, grounds)) {
    if (!open[candidate.k]) continue;
    best = better(best, settle(candidate, candidate.available, 'samples in hand', tallies, weighted, settings));
  }
  if (best !== undefined) return best;
  for (let k = 0; k < weighted.length; k++) {
    if (!open[k]) continue;
    const analytes = analytesOf(weighted[k], grounds).filter((symbol) => symbol !== 'SiO2');
    best = better(best, settle({ k, analytes, available: 0 }, mostNewSamples, 'new samples', tallies, weighted, settings));
  }
  return best;
}

function better(best: FurtherMeasurement | undefined, next: FurtherMeasurement | undefined): FurtherMeasurement | undefined {
  return next !== undefined && (best === undefined || next.samples < best.samples) ? next : best;
}

const readerOf = ({ indicator }: Weighted, grounds: Grounds) => (indicator.basis === 'as given' ? grounds.asGiven : grounds.volatileFree);

function analytesOf(of: Weighted, grounds: Grounds): string[] {
  const reader = readerOf(of, grounds);
  return [...new Set(of.indicator.conditions.flatMap(({ expression, limit }) => [...reader.symbols(expression), ...reader.symbols(limit)]))];
}

/** For each weighted criterion, what the samples that could otherwise be asked are lacking, and how many lack just that. */
function candidatesInHand(weighted: readonly Weighted[], answers: readonly IndicatorAnswers[], rows: Int32Array, grounds: Grounds): Candidate[] {
  const out: Candidate[] = [];
  for (let k = 0; k < weighted.length; k++) {
    if (weighted[k].weight === 0) continue;
    const operands = analytesOf(weighted[k], grounds).map((symbol) => [symbol, readerOf(weighted[k], grounds).column(symbol)] as const);
    const lacking = new Map<string, number>();
    for (const row of rows) {
      if (answers[k].verdicts[row] !== fertilityVerdict.notMeasured) continue;
      const missing = operands.filter(([, column]) => column === undefined || column.states[row] === cellState.missing).map(([symbol]) => symbol).join(' ');
      if (missing !== '') lacking.set(missing, (lacking.get(missing) ?? 0) + 1);
    }
    for (const [missing, available] of lacking) out.push({ k, analytes: missing.split(' '), available });
  }
  return out;
}

function settle(
  { k, analytes, available }: Candidate,
  most: number,
  on: FurtherMeasurement['on'],
  tallies: readonly IndicatorTally[],
  weighted: readonly Weighted[],
  { cut, interval }: { readonly cut: number; readonly interval: IntervalChoice },
): FurtherMeasurement | undefined {
  const tally = tallies[k];
  const verdictWith = (met: number, notMet: number): GroupVerdict => {
    const changed = { ...tally, ...shareOf(tally.met + met, tally.near, tally.notMet + notMet, interval) };
    return scoreGroup(tallies.map((each, j) => (j === k ? changed : each)), weighted, cut).verdict;
  };
  for (let n = 1; n <= most; n++) {
    const soFar = Math.round(n * tally.share);
    const outcomes: FurtherMeasurement['outcomes'] = tally.asked > 0
      ? [{ if: 'as so far', verdict: verdictWith(soFar, n - soFar) }]
      : [{ if: 'all met', verdict: verdictWith(n, 0) }, { if: 'none met', verdict: verdictWith(0, n) }];
    if (!outcomes.some(({ verdict }) => verdict === 'supported' || verdict === 'not supported')) continue;
    const what = analytes.length > 1 ? `${analytes.slice(0, -1).join(', ')} and ${analytes.at(-1)}` : analytes[0];
    const where = on === 'samples in hand' ? `${n} of ${available} samples that lack ${analytes.length > 1 ? 'them' : 'it'}` : `${n} new fresh sample${n === 1 ? '' : 's'} in the silica window`;
    const { name, key } = weighted[k].indicator;
    return { indicator: key, analytes, samples: n, on, available, outcomes, text: `${what} on ${where} (${name}: ${outcomes.map((each) => `${each.if} → ${each.verdict}`).join('; ')})` };
  }
  return undefined;
}
