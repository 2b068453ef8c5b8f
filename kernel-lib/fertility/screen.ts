import { showAs, type Showable } from '../display';
import { step, type Step, type Suite } from '../suite';
import { reservoir, shortSource } from '../tables';
import type { IndicatorAnswers } from './answers';
import { calibrateFertility, type FertilityCalibration } from './calibration';
import { cautionsOf } from './cautions';
import { gatherEvidence, type Evidence } from './evidence';
import { furtherMeasurement, type FurtherMeasurement } from './further';
import { groupPosition, groupTrend, groupValues, type IndicatorTrend, type IndicatorValues } from './group-values';
import type { GuardFlags } from './guard-flags';
import { scoreGroup, type EvidenceScore, type Weighted } from './score';
import { readSettings, type RankingOptions, type Settings } from './settings';
import { conditionsText, fertilityIndicators, fertilityTables, indicatorLanguage } from './tables';
import type { IndicatorTally } from './tally';
import { screenView } from './view';
import { rankRanges, type RankRange } from './weight-sensitivity';

/** How a suite is screened. */
export interface ScreenOptions extends RankingOptions {
  /** The label whose texts are the groups: an intrusion, a volcano, a district. */
  readonly group: string;
  /** Labelled districts to check the score on (labels `district`, `label`); default: the published ones of `labelledDistricts()`. */
  readonly labelled?: Suite;
}

/** What the samples say of one group. */
export interface GroupEvidence extends EvidenceScore {
  /** From 1; equal scores share the better rank. */
  readonly rank: number;
  readonly group: string;
  readonly samples: number;
  /** Samples that could be asked at least one weighted criterion. */
  readonly asked: number;
  /** Samples left out by a guard, and samples struck out of the criteria on mobile elements. */
  readonly leftOut: number;
  readonly struckOut: number;
  /** One entry a criterion. */
  readonly tallies: readonly IndicatorTally[];
  readonly ranks: RankRange;
  /** Undefined when the verdict is settled, or when no measurement in reason could settle it. */
  readonly further?: FurtherMeasurement;
  readonly values: readonly IndicatorValues[];
  readonly trends: readonly IndicatorTrend[];
  /** Middle of the samples' coordinates, °; NaN without any. */
  readonly latitude: number;
  readonly longitude: number;
}

/** A screened suite: verdicts of every sample, the ranked groups, and all that has to be said with them. */
export interface FertilityScreen extends Showable {
  /** The label that made the groups. */
  readonly label: string;
  readonly suite: Suite;
  /** Best first. */
  readonly groups: readonly GroupEvidence[];
  /** One entry an indicator; arrays of one entry a sample. */
  readonly answers: readonly IndicatorAnswers[];
  readonly guards: readonly GuardFlags[];
  readonly weights: Readonly<Record<string, number>>;
  readonly calibration: FertilityCalibration;
  readonly cautions: readonly string[];
  readonly sources: readonly string[];
  readonly lineage: readonly Step[];
}

/** A ranking of more groups than this is no ranking that anyone reads, and its sensitivity would take minutes. */
const mostGroups = 5000;

const evidenceOf = new WeakMap<FertilityScreen, { readonly evidence: Evidence; readonly settings: Settings; readonly options: ScreenOptions }>();

/**
 * Screens a suite for copper-gold potential: asks published whole-rock criteria of every sample, strikes out what alteration, weathering,
 * cumulates or a bad total spoil, and ranks the groups by a small open score with its interval, its sensitivity to the weights, the
 * smallest further measurement that could settle an undecided group, and how the score does on labelled districts.
 *
 * The score of a group is the weighted mean, over the criteria that could be asked, of the share of samples that meet them (near counts
 * half). A group is `supported` when the whole interval lies above the cut and at least two independent lines of evidence do;
 * `not supported` when it lies below; otherwise `undecided`. Zircon indices are not whole-rock criteria and are left out.
 *
 * @param suite n samples; oxides in wt %, elements in ppm; 1σ where known (for `near`); the label `alteration` from the audit ('' = none);
 *   optional columns `latitude`, `longitude` (°)
 * @param options `group`: label name (needed); `weights`: by indicator key over the defaults; `cut` 0–1 (0.5); `interval`: `wilson` or
 *   `clopper-pearson`; `confidence` (0.95); `basis`: `volatile-free` or `as given`; `rankBy`: `low` or `score`; `draws` (1000; fewer beyond 1,000 groups), `spread`
 *   (3), `seed` (7946), `first` (5) for the sensitivity; `labelled`: your own labelled districts
 * @returns ranked groups, verdict and reason codes of every sample (n), guards, calibration, cautions, lineage
 * @throws RangeError for an unknown label or option, naming what is allowed; for more than 5,000 groups
 * @source the works named by each indicator; Wilson 1927, Clopper & Pearson 1934 (intervals)
 * Valid for whole-rock analyses of arc suites inside each criterion's silica window; it screens provinces and suites and does not find ore.
 * @example screenFertility(suite, { group: 'volcano' }).groups[0].group
 */
export function screenFertility(suite: Suite, options: ScreenOptions): FertilityScreen {
  const settings = readSettings('screenFertility', options, ['group', 'labelled']);
  if (typeof options.group !== 'string' || !suite.labels.has(options.group)) {
    throw new RangeError(
      `screenFertility: group must name a label of the suite, not "${String(options.group)}". It has: ${[...suite.labels.keys()].join(', ')}.`,
    );
  }
  const groups = new Set(suite.label(options.group)).size;
  if (groups > mostGroups) {
    throw new RangeError(
      `screenFertility: the label "${options.group}" makes ${groups} groups; at most ${mostGroups} are ranked. Group by what samples share, such as an intrusion.`,
    );
  }
  const evidence = gatherEvidence(suite, options.group, fertilityIndicators(), settings.basis, settings.interval);
  return weigh(evidence, settings, options);
}

/**
 * Ranks the groups of a screening again with other weights, cut or interval, without asking the samples again.
 *
 * @param screen what `screenFertility` returned
 * @param options as in `screenFertility`; those not given keep the screening's
 * @returns a new screening with the same verdicts of the samples
 * @throws RangeError for an unknown option, for another basis or interval method (which need a new screening), or for a screening that was
 *   not made here
 * @example rankGroups(screen, { weights: { 'v-sc-2014': 2, 'la-yb-1986': 0 } })
 */
export function rankGroups(screen: FertilityScreen, options: RankingOptions = {}): FertilityScreen {
  const made = evidenceOf.get(screen);
  if (made === undefined) throw new RangeError('rankGroups: the first argument must be what screenFertility returned, not a copy of it.');
  for (const name of ['basis', 'interval', 'confidence'] as const) {
    if (options[name] !== undefined && options[name] !== made.options[name])
      throw new RangeError(`rankGroups: another ${name} asks the samples anew; call screenFertility with it.`);
  }
  const merged = { ...made.options, ...options, weights: { ...made.options.weights, ...options.weights } };
  return weigh(made.evidence, readSettings('rankGroups', merged, ['group', 'labelled']), merged);
}

function weigh(evidence: Evidence, settings: Settings, options: ScreenOptions): FertilityScreen {
  const { grouping, criteria, tallies, answers, guarding, grounds } = evidence;
  const { weights, cut, interval, rankBy } = settings;
  // Many groups need fewer draws to be as well known, and a sort of all of them each.
  const variation = {
    ...settings.variation,
    draws: Math.min(settings.variation.draws, Math.max(100, Math.floor(1e6 / Math.max(1, tallies.length)))),
  };
  const weighted: Weighted[] = criteria.map(({ indicator }) => ({ indicator, weight: weights[indicator.key] }));
  const scores = tallies.map((each) => scoreGroup(each, weighted, cut));
  const ranges = rankRanges(tallies, weighted, rankBy, variation);
  const order = grouping.names.map((_, group) => group);
  const key = (group: number) => (Number.isNaN(scores[group].score) ? -1 : scores[group][rankBy]);
  order.sort((a, b) => key(b) - key(a) || (grouping.names[a] < grouping.names[b] ? -1 : 1));
  const asked = askedByGroup(evidence, weighted);
  const shown = answers.filter(({ indicator }) => indicator.kind === 'shown' || weights[indicator.key] > 0);
  const trends = answers.filter(({ indicator }) => indicator.kind === 'trend');
  let rank = 0;
  const groups = order.map((group, place): GroupEvidence => {
    if (place === 0 || key(group) < key(order[place - 1])) rank = place + 1;
    const rows = grouping.rows[group];
    const undecided = scores[group].verdict === 'undecided' || scores[group].verdict === 'cannot be asked';
    const further = undecided ? furtherMeasurement({ tallies: tallies[group], weighted, cut, interval }, criteria, rows, grounds) : undefined;
    return {
      rank,
      group: grouping.names[group],
      samples: rows.length,
      asked: asked[group],
      leftOut: count(guarding.excluded, rows),
      struckOut: count(guarding.struck, rows),
      tallies: tallies[group],
      ...scores[group],
      ranks: ranges[group],
      ...(further === undefined ? {} : { further }),
      values: shown.map((each) => groupValues(each, rows)),
      trends: trends.map((each) => groupTrend(each, rows, evidence)),
      ...groupPosition(evidence, rows),
    };
  });
  const { weights: given, cut: cutGiven, basis, interval: method, confidence, labelled } = options;
  const calibration = calibrateFertility(defined({ weights: given, cut: cutGiven, basis, interval: method, confidence, labelled }));
  const sources = [
    ...new Set([
      ...answers.map(({ indicator }) => indicator.source),
      ...guarding.guards.map(({ guard }) => guard.source).filter((source) => source !== ''),
      method === 'clopper-pearson' ? 'clopper_pearson_1934' : 'wilson_1927',
      'georoc_convergent_margins_2022',
      ...referenceSources(),
    ]),
  ];
  const because = step(
    'screenFertility',
    {
      group: grouping.label,
      basis: settings.basis,
      cut,
      interval: interval.method,
      confidence: interval.confidence,
      rankBy,
      weights: { ...weights },
      seed: variation.seed,
      draws: variation.draws,
      spread: variation.spread,
      samples: grouping.of.length,
      groups: groups.length,
      supported: groups.filter(({ verdict }) => verdict === 'supported').length,
      calibration: calibration.statement,
    },
    {
      sources,
      tables: [...fertilityTables, 'fertility/labelled-districts.csv', 'reservoirs.csv', 'named-quantities.csv'],
      fromMemory: limitsFromMemory(answers),
      says: methodsText(evidence, settings),
    },
  );
  const content: Omit<FertilityScreen, keyof Showable> = {
    label: grouping.label,
    suite: grounds.suite,
    groups,
    answers,
    guards: guarding.guards,
    weights,
    calibration,
    sources,
    cautions: [...cautionsOf(evidence, weights), calibration.statement],
    lineage: [...grounds.suite.lineage, because],
  };
  const screen: FertilityScreen = showAs(content, () => screenView(screen));
  evidenceOf.set(screen, { evidence, settings, options });
  return screen;
}

/** The works behind the reference composition of the rare earths. */
function referenceSources(): string[] {
  const { values } = reservoir(indicatorLanguage().reference);
  return [...new Set(['La', 'Sm', 'Eu', 'Gd', 'Yb'].flatMap((element) => values.get(element)?.source ?? []))];
}

/** The limits that were recalled and not seen, each in words. */
function limitsFromMemory(answers: readonly IndicatorAnswers[]): string[] {
  return answers
    .filter(({ indicator }) => indicator.kind === 'criterion' && indicator.standing === 'from memory')
    .map(({ indicator }) => `${indicator.name}: ${conditionsText(indicator)} (${shortSource(indicator.source)})`);
}

function methodsText({ criteria }: Evidence, { weights, cut, interval, basis }: Settings): string {
  const used = criteria
    .filter(({ indicator }) => weights[indicator.key] > 0)
    .map(({ indicator }) => `${indicator.name} (${shortSource(indicator.source)}; weight ${weights[indicator.key]})`);
  const oxides = basis === 'as given' ? 'oxides as given' : 'volatile-free oxides';
  const intervals = `${interval.method === 'wilson' ? 'Wilson' : 'Clopper–Pearson'} ${Math.round(100 * interval.confidence)} % intervals`;
  return (
    `Groups were ranked by the weighted share of samples that meet ${used.join(', ')}, on ${oxides}, with ${intervals} and a cut of ${cut}. ` +
    'Cumulates and samples with a total out of range were not counted; altered and weathered ones were not counted in criteria on mobile elements.'
  );
}

function count(flags: Uint8Array, rows: Int32Array): number {
  let total = 0;
  for (const row of rows) if (flags[row] !== 0) total++;
  return total;
}

/** How many samples of each group were asked at least one weighted criterion. */
function askedByGroup({ grouping, criteria }: Evidence, weighted: readonly Weighted[]): Int32Array {
  const out = new Int32Array(grouping.names.length);
  const verdicts = criteria.filter((_, k) => weighted[k].weight > 0).map((each) => each.verdicts);
  for (let i = 0; i < grouping.of.length; i++) {
    if (grouping.of[i] < 0) continue;
    // Codes 0 to 2 are the verdicts of a sample that was asked.
    for (const each of verdicts) {
      if (each[i] > 2) continue;
      out[grouping.of[i]]++;
      break;
    }
  }
  return out;
}

function defined<Options extends object>(options: Options): Options {
  return Object.fromEntries(Object.entries(options).filter(([, value]) => value !== undefined)) as Options;
}
