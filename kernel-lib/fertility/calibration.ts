import { showAs, type Showable } from '../display';
import { step, type Step, type Suite } from '../suite';
import { proportionInterval } from './binomial';
import { gatherEvidence } from './evidence';
import { labelledDistricts } from './labelled';
import { scoreGroup, type GroupVerdict, type Weighted } from './score';
import { readSettings, type WeightingOptions } from './settings';
import { fertilityTables } from './tables';

/** How one labelled district fared when the cut was set without it. */
export interface DistrictTrial {
  readonly district: string;
  readonly label: 'fertile' | 'barren';
  readonly samples: number;
  /** NaN when no weighted criterion could be asked. */
  readonly score: number;
  readonly low: number;
  readonly high: number;
  /** The verdict at the fixed cut. */
  readonly verdict: GroupVerdict;
  /** The cut set by the other districts; NaN when they hold only one kind. */
  readonly cut: number;
  /** What the district is called at that cut. */
  readonly called: 'fertile' | 'barren' | 'not asked';
}

/** A count out of a count, with its exact 95 % interval. */
export interface TrialRate {
  readonly count: number;
  readonly of: number;
  readonly low: number;
  readonly high: number;
}

/** How the score does on labelled districts, each judged by a cut that was set without it. */
export interface FertilityCalibration extends Showable {
  readonly districts: readonly DistrictTrial[];
  /** Fertile districts called fertile. */
  readonly hits: TrialRate;
  /** Barren districts called fertile. */
  readonly falseAlarms: TrialRate;
  /** Whether there are enough districts of both kinds to speak of rates. */
  readonly enough: boolean;
  /** All that in a sentence, to be printed with every verdict. */
  readonly statement: string;
  readonly lineage: readonly Step[];
}

/** With fewer districts of a kind than this, a 95 % interval on a rate spans a third of the scale or more (own convention). */
const fewestDistricts = 10;

/**
 * Checks the evidence score on labelled districts by leaving one out: the cut between fertile and barren is set on all districts but one,
 * and the one left out is called by it. The weights are given, not fitted.
 *
 * @param options `labelled`: a suite with the labels `district` and `label` (`fertile` or `barren`); default: the published analyses of
 *   `labelledDistricts()`. `weights`, `cut`, `interval`, `confidence`, `basis`: as in `screenFertility`
 * @returns rates with exact binomial intervals, one trial a district, and the sentence to print; says so when the districts are too few
 * @throws RangeError for a suite without those labels, a label other than the two, or one district with both
 * @source Clopper & Pearson 1934 (intervals); labelled analyses: GEOROC 2022
 * @example calibrateFertility().statement
 */
export function calibrateFertility(options: WeightingOptions & { readonly labelled?: Suite } = {}): FertilityCalibration {
  const settings = readSettings('calibrateFertility', options);
  const labelled = options.labelled ?? labelledDistricts();
  const evidence = gatherEvidence(labelled, 'district', settings.criteria, settings.basis, settings.interval);
  const weighted: Weighted[] = settings.criteria.map((indicator) => ({ indicator, weight: settings.weights[indicator.key] ?? 0 }));
  const labels = labelled.label('label');
  const found = evidence.grouping.names.map((district, group) => {
    const rows = evidence.grouping.rows[group];
    const own = new Set(Array.from(rows, (row) => labels[row]));
    const [label] = own;
    if (own.size > 1)
      throw new RangeError(`calibrateFertility: the district "${district}" has both labels; a label belongs to a district, not to a sample.`);
    if (label !== 'fertile' && label !== 'barren')
      throw new RangeError(`calibrateFertility: the district "${district}" has the label "${label}"; give "fertile" or "barren".`);
    return { district, label: label as 'fertile' | 'barren', samples: rows.length, ...scoreGroup(evidence.tallies[group], weighted, settings.cut) };
  });
  const asked = found.filter(({ score }) => !Number.isNaN(score));
  const districts = found.map(({ district, label, samples, score, low, high, verdict }): DistrictTrial => {
    const cut = bestCut(asked.filter((other) => other.district !== district));
    const called = Number.isNaN(score) || Number.isNaN(cut) ? 'not asked' : score > cut ? 'fertile' : 'barren';
    return { district, label, samples, score, low, high, verdict, cut, called };
  });
  const rate = (label: 'fertile' | 'barren'): TrialRate => {
    const tried = districts.filter((each) => each.label === label && each.called !== 'not asked');
    const count = tried.filter(({ called }) => called === 'fertile').length;
    return { count, of: tried.length, ...proportionInterval(count, tried.length, { method: 'clopper-pearson' }) };
  };
  const hits = rate('fertile');
  const falseAlarms = rate('barren');
  const enough = hits.of >= fewestDistricts && falseAlarms.of >= fewestDistricts;
  const statement = sayHowGood(districts, hits, falseAlarms, enough);
  const lineage = [
    ...labelled.lineage,
    step(
      'calibrateFertility',
      { weights: settings.weights, basis: settings.basis, districts: districts.length, hits: hits.count, falseAlarms: falseAlarms.count },
      {
        sources: ['clopper_pearson_1934'],
        tables: fertilityTables,
      },
    ),
  ];
  return showAs({ districts, hits, falseAlarms, enough, statement, lineage }, () => ({
    title: 'The score on labelled districts, one left out at a time',
    columns: ['district', 'label', 'samples', 'score', '95 % from', 'to', 'cut set by the others', 'called', 'verdict at the fixed cut'],
    rows: districts.map((each) => [each.district, each.label, each.samples, each.score, each.low, each.high, each.cut, each.called, each.verdict]),
    notes: [statement],
  }));
}

/** The cut with the largest difference between hits and false alarms; of equals, the middle of the widest gap. */
function bestCut(districts: readonly { readonly label: string; readonly score: number }[]): number {
  const fertile = districts.filter(({ label }) => label === 'fertile');
  const barren = districts.filter(({ label }) => label === 'barren');
  if (fertile.length === 0 || barren.length === 0) return NaN;
  const scores = [...new Set(districts.map(({ score }) => score))].sort((a, b) => a - b);
  let best = { cut: 0.5, gain: -Infinity, gap: 0 };
  for (let i = 0; i + 1 < scores.length; i++) {
    const cut = (scores[i] + scores[i + 1]) / 2;
    const gap = scores[i + 1] - scores[i];
    const above = (of: readonly { readonly score: number }[]) => of.filter(({ score }) => score > cut).length / of.length;
    const gain = above(fertile) - above(barren);
    if (gain > best.gain || (gain === best.gain && gap > best.gap)) best = { cut, gain, gap };
  }
  return best.cut;
}

function sayHowGood(districts: readonly DistrictTrial[], hits: TrialRate, falseAlarms: TrialRate, enough: boolean): string {
  const percent = (share: number) => `${Math.round(100 * share)}`;
  const say = ({ count, of, low, high }: TrialRate) =>
    of === 0 ? 'none could be asked' : `${count} of ${of} (95 %: ${percent(low)}–${percent(high)} %)`;
  const left = districts.filter(({ called }) => called === 'not asked').length;
  const rates = `fertile found ${say(hits)}; barren called fertile ${say(falseAlarms)}${left === 0 ? '' : `; ${left} could not be asked`}`;
  const trial = `Checked on ${districts.length} labelled districts, each called by a cut set without it: ${rates}.`;
  return enough
    ? trial
    : `${trial} These are too few districts to state a hit or false-alarm rate (at least ${fewestDistricts} of each kind would be needed): ` +
        'read the score as an order of evidence, not as a probability.';
}
