import { findAnalyte } from '../../chemistry';
import { showAs, type Showable, type TableCell, type TableView } from '../../display';
import { step, type Suite, type Traced } from '../../suite';
import { alterationRules, screenAlteration, type AlterationScreen } from './alteration';
import { blankLimits, type BlankLimit } from './blanks';
import { columnSigmas, type ColumnSigma, type StatedSigma } from './column-sigma';
import { duplicateGroups, duplicatePrecision, namesAreReused, unlikePairs, type DuplicatePrecision, type UnlikePair } from './duplicates';
import { accuracy, checkMaterials, recoveries, type AccuracyVerdict, type MixUp, type Recovery } from './recoveries';
import { rockMaterial, type RockMaterial } from './rock-materials';
import { sampleRoles } from './sample-roles';
import { analysisTotals, type Totals } from './totals';

/** How a batch is audited; every limit has a stated default. */
export interface AuditOptions {
  /** Totals that pass, wt % (default 98 to 102). */
  readonly totals?: { readonly from?: number; readonly to?: number };
  /** Source by reference material, where not the best supported one: `{ 'BHVO-2': 'usgs_bhvo2_1998' }`. */
  readonly certificates?: Readonly<Record<string, string>>;
  /** Bias that passes as fit, % (default 2). */
  readonly tolerance?: number;
  /** Label whose equal texts are duplicates (default `sample`, marks such as "dup" left off). */
  readonly duplicates?: string;
  /** 1σ that the user states, by symbol: `{ Ba: { percent: 3 }, SiO2: { absolute: 0.2 } }`; used where nothing was measured. */
  readonly sigma?: Readonly<Record<string, StatedSigma>>;
  /** Other limits of the alteration screen by rule, or null to leave a rule out: `{ 'loss-on-ignition': { high: 3 } }`. */
  readonly alteration?: Readonly<Record<string, { readonly low?: number; readonly high?: number } | null>>;
  /** The igneous spectrum of Hughes (1973), if the user has its lines: points [100·K2O/(K2O+Na2O), K2O+Na2O]. */
  readonly spectrum?: { readonly soda: readonly (readonly [number, number])[]; readonly potash: readonly (readonly [number, number])[] };
  /** Label within which mobile elements are held against immobile ones (default `volcano`). */
  readonly group?: string;
  /** Whether reference materials and blanks stay in the suite (default `samples`: they are taken out). */
  readonly keep?: 'samples' | 'all';
}

/** What an audit found. Row numbers are those of the suite that was audited, from 0. */
export interface Audit extends Traced, Showable {
  /** The samples with 1σ on every column that has one, and the label `alteration` ('' where none). */
  readonly suite: Suite;
  readonly totals: Totals;
  readonly recoveries: readonly Recovery[];
  readonly accuracy: readonly AccuracyVerdict[];
  readonly mixUps: readonly MixUp[];
  readonly unlikePairs: readonly UnlikePair[];
  readonly duplicates: readonly DuplicatePrecision[];
  readonly blanks: readonly BlankLimit[];
  readonly sigmas: readonly ColumnSigma[];
  readonly alteration: AlterationScreen;
  /** Rows taken out of the suite, and what they are. */
  readonly takenOut: readonly { readonly row: number; readonly sample: string; readonly as: string }[];
  readonly pleaseCheck: readonly string[];
}

/**
 * Laboratory quality control and alteration screen of a suite, before any petrology.
 *
 * Totals (with and without volatiles), reference materials found by name (recovery, bias, z-score, control chart), duplicates (pooled
 * precision, and the line against concentration from 50 pairs on), detection limits from blanks, 1σ for every column from what was
 * measured, and a verdict on alteration for every sample. Values are never changed; no uncertainty is invented.
 *
 * @param suite n samples as read
 * @param options see `AuditOptions`
 * @returns the samples with their 1σ and the label `alteration` (reasons in words, '' where none; only samples found altered carry one),
 *   and every finding as plain data
 * @throws RangeError for an unknown option or label
 * @source Thompson & Howarth 1976 (duplicates); Long & Winefordner 1983 (blanks); Le Maitre et al. 2002 (volatile limits)
 * @example const checked = audit(assays.suite); checked.suite
 */
export function audit(suite: Suite, options: AuditOptions = {}): Audit {
  checkAuditOptions(suite, options);
  const { tolerance = 2, certificates = {}, group = 'volcano', keep = 'samples', alteration: limits = {}, spectrum } = options;
  const window = { from: options.totals?.from ?? 98, to: options.totals?.to ?? 102 };
  const roles = sampleRoles(suite, options.duplicates ?? 'sample');
  const materialOptions = { certificates, tolerance };
  const { rows: materials, mixUps } = checkMaterials(suite, roles.material, materialOptions);
  const misnamed = new Set(mixUps.map(({ row }) => row));
  const isControl = (row: number) => materials.has(row) || roles.blank[row] || misnamed.has(row);
  const runs = recoveries(suite, materials);
  const verdicts = accuracy(suite, materials, runs, materialOptions);
  const groups = duplicateGroups(roles.base, isControl);
  const unlike = unlikePairs(suite, groups);
  const reused = namesAreReused(unlike, groups);
  const suspect = new Set(unlike.map(({ rows }) => rows.join()));
  const duplicates = duplicatePrecision(suite, reused ? [] : groups.filter((rows) => !rows.some((row) => suspect.has(`${rows[0]},${row}`))));
  const blanks = blankLimits(suite, roles.blank);
  const { columns, sigmas } = columnSigmas(suite, duplicates, runs, options.sigma ?? {});
  const totals = analysisTotals(suite, window);
  const screen = screenAlteration(suite, { limits, spectrum, group });
  const label = screen.verdict.map((verdict, row) => (verdict === 'altered' && !isControl(row) ? screen.reason[row] : ''));
  const takenOut = keep === 'all' ? [] : takenOutOf(suite, materials, misnamed, roles);
  const pleaseCheck = attention({ suite, totals, verdicts, mixUps, unlike, reused, blanks, screen, isControl, takenOut });
  const because = auditStep(suite, options, { materials, runs, duplicates, sigmas, screen, takenOut, window, tolerance, label });
  let audited = suite.with(columns, because).withLabels({ alteration: label }, step('audit: label', { alteration: label.filter(Boolean).length }));
  if (takenOut.length > 0) {
    const out = new Set(takenOut.map(({ row }) => row));
    const left = Array.from({ length: suite.size }, (_, row) => row).filter((row) => !out.has(row));
    audited = audited.rows(left, step('audit: samples only', { takenOut: takenOut.map(({ sample, as }) => `${sample} (${as})`), kept: left.length }));
  }
  const found = {
    suite: audited,
    totals,
    recoveries: runs,
    accuracy: verdicts,
    mixUps,
    unlikePairs: unlike,
    duplicates,
    blanks,
    sigmas,
    alteration: screen,
    takenOut,
    pleaseCheck,
    lineage: audited.lineage,
  };
  return showAs(found, () => auditView(found, suite.size));
}

function takenOutOf(suite: Suite, materials: ReadonlyMap<number, RockMaterial>, misnamed: ReadonlySet<number>, roles: { blank: readonly boolean[] }) {
  const out: { row: number; sample: string; as: string }[] = [];
  for (let row = 0; row < suite.size; row++) {
    const as = materials.get(row)?.material ?? (roles.blank[row] ? 'blank' : misnamed.has(row) ? 'named as a reference material, but not it' : '');
    if (as !== '') out.push({ row, sample: suite.samples[row], as });
  }
  return out;
}

interface Findings {
  readonly suite: Suite;
  readonly totals: Totals;
  readonly verdicts: readonly AccuracyVerdict[];
  readonly mixUps: readonly MixUp[];
  readonly unlike: readonly UnlikePair[];
  readonly reused: boolean;
  readonly blanks: readonly BlankLimit[];
  readonly screen: AlterationScreen;
  readonly isControl: (row: number) => boolean;
  readonly takenOut: Audit['takenOut'];
}

const mostListed = 20;

function attention({ suite, totals, verdicts, mixUps, unlike, reused, blanks, screen, isControl, takenOut }: Findings): string[] {
  const names = new Set(unlike.map(({ sample }) => sample)).size;
  const list: string[] = mixUps.map(({ words }) => words);
  if (reused) list.push(`${names} sample names stand on unlike rows, as in a compilation of many papers: equal names are not taken as duplicates`);
  else list.push(...unlike.map(({ words }) => words));
  for (const { analyte, words, verdict, chart } of verdicts) {
    if (verdict === 'biased') list.push(`${analyte} is ${words} against the reference materials`);
    for (const signal of chart) list.push(`${analyte}: ${signal}`);
  }
  for (const { analyte, samplesBelow, limit } of blanks)
    if (samplesBelow > 0) list.push(`${analyte}: ${samplesBelow} values lie below the blanks' detection limit of ${Number(limit.toPrecision(3))}`);
  const say = (what: string, rows: readonly number[], words: (row: number) => string) => {
    if (rows.length > 0)
      list.push(
        `${what} (${rows.length}): ${rows
          .slice(0, mostListed)
          .map((row) => `${suite.samples[row]} (${words(row)})`)
          .join(', ')}${rows.length > mostListed ? ' …' : ''}`,
      );
  };
  const rows = Array.from({ length: suite.size }, (_, row) => row).filter((row) => !isControl(row));
  say(
    'totals outside the window',
    rows.filter((row) => totals.verdict[row] === 'low' || totals.verdict[row] === 'high'),
    (row) => totals.words[row],
  );
  say(
    'no total, because a major oxide is missing',
    rows.filter((row) => totals.verdict[row] === 'not determined' && totals.measured[row] > 0),
    (row) => totals.words[row].replace('total not determined: ', ''),
  );
  say(
    'altered samples',
    rows.filter((row) => screen.verdict[row] === 'altered'),
    (row) => screen.reason[row],
  );
  if (takenOut.length > 0)
    list.push(
      `taken out of the suite: ${takenOut
        .slice(0, mostListed)
        .map(({ sample, as }) => `${sample} (${as})`)
        .join(', ')}${takenOut.length > mostListed ? ` and ${takenOut.length - mostListed} more` : ''}`,
    );
  return list;
}

interface StepParts {
  readonly materials: ReadonlyMap<number, RockMaterial>;
  readonly runs: readonly Recovery[];
  readonly duplicates: readonly DuplicatePrecision[];
  readonly sigmas: readonly ColumnSigma[];
  readonly screen: AlterationScreen;
  readonly takenOut: Audit['takenOut'];
  readonly window: { readonly from: number; readonly to: number };
  readonly tolerance: number;
  readonly label: readonly string[];
}

function auditStep(suite: Suite, options: AuditOptions, parts: StepParts) {
  const { materials, duplicates, sigmas, window, tolerance, label, takenOut } = parts;
  const used = new Map([...materials.values()].map(({ material, source }) => [material, source]));
  const remembered = [...used].flatMap(([name, source]) =>
    [...rockMaterial(name, source).values.values()]
      .filter(({ standing, analyte }) => standing === 'from memory' && suite.has(analyte))
      .map(({ analyte, value }) => `${analyte} in ${name} ${value} (${source})`),
  );
  const left = options.alteration ?? {};
  for (const { key, reason, low, high, source, standing } of alterationRules()) {
    if (standing !== 'from memory' || left[key] !== undefined || parts.screen.rulesNotAsked.includes(key)) continue;
    remembered.push(
      `alteration screen: ${reason} ${low === undefined ? `above ${high}` : `below ${low}`}${low !== undefined && high !== undefined ? ` or above ${high}` : ''} (${source})`,
    );
  }
  const altered = label.filter(Boolean).length;
  return step(
    'audit',
    {
      totals: { ...window },
      tolerance,
      materials: [...used].map(([material, source]) => ({
        material,
        source,
        runs: [...materials.values()].filter((each) => each.material === material).length,
      })),
      duplicates: duplicates.reduce((most, { groups }) => Math.max(most, groups), 0),
      sigma: Object.fromEntries(sigmas.map(({ analyte, words }) => [analyte, words])),
      altered,
      takenOut: takenOut.length,
      limits: JSON.parse(JSON.stringify(options.alteration ?? {})) as Record<string, null>,
    },
    {
      sources: [
        'thompson_howarth_1976',
        'long_winefordner_1983',
        'le_maitre_2002',
        'large_2001',
        'nesbitt_young_1982',
        'taylor_mclennan_1985',
        ...(options.spectrum === undefined ? [] : ['hughes_1973']),
        ...new Set(used.values()),
      ],
      tables: ['reference-materials.csv', 'alteration-screen.csv'],
      fromMemory: remembered,
      says: `Accuracy was checked on ${materials.size} runs of reference materials${used.size === 0 ? '' : ` (${[...used.keys()].join(', ')})`}, precision on duplicates; ${altered} samples were flagged as altered by volatile content, alteration indices, Ce anomaly and mobile against immobile elements.`,
    },
  );
}

function auditView(found: Omit<Audit, 'toMimeBundle'>, size: number): TableView {
  const { totals, accuracy: verdicts, duplicates, blanks, sigmas, alteration, pleaseCheck } = found;
  const precision = new Map(duplicates.map((each) => [each.analyte, each]));
  const limits = new Map(blanks.map((each) => [each.analyte, each]));
  const bySymbol = new Map(verdicts.map((each) => [each.analyte, each]));
  const count = (verdict: string) => alteration.verdict.filter((each) => each === verdict).length;
  return {
    title: 'Audit',
    columns: ['analyte', 'accuracy', 'runs', 'precision %', 'duplicates', 'blank limit', '1σ typical', '1σ from'],
    mostRows: Infinity,
    rows: sigmas
      .filter(({ analyte }) => findAnalyte(analyte) !== undefined)
      .map(({ analyte, typical, words }): TableCell[] => [
        analyte,
        bySymbol.get(analyte)?.words ?? 'not covered',
        bySymbol.get(analyte)?.runs ?? 0,
        precision.has(analyte) ? Number(precision.get(analyte)!.relative.toPrecision(3)) : null,
        precision.get(analyte)?.groups ?? 0,
        limits.has(analyte) ? Number(limits.get(analyte)!.limit.toPrecision(3)) : null,
        Number.isNaN(typical) ? null : Number(typical.toPrecision(2)),
        words,
      ]),
    notes: [
      `${size} rows: totals from ${totals.window.from} to ${totals.window.to} wt %: ${totals.verdict.filter((each) => each === 'in window').length} in the window, ${totals.verdict.filter((each) => each === 'low').length} low, ${totals.verdict.filter((each) => each === 'high').length} high, ${totals.verdict.filter((each) => each === 'not determined').length} not determined.`,
      `Alteration: ${count('fresh')} fresh, ${count('suspect')} suspect, ${count('altered')} altered, ${count('not determined')} not determined.`,
      ...pleaseCheck.map((text) => `Please check: ${text}`),
    ],
  };
}

function checkAuditOptions(suite: Suite, options: AuditOptions): void {
  const names = ['totals', 'certificates', 'tolerance', 'duplicates', 'sigma', 'alteration', 'spectrum', 'group', 'keep'];
  for (const name of Object.keys(options))
    if (!names.includes(name)) throw new RangeError(`audit: there is no option "${name}". Options: ${names.join(', ')}.`);
  const { keep, tolerance, duplicates, sigma = {} } = options;
  if (keep !== undefined && keep !== 'samples' && keep !== 'all')
    throw new RangeError(`audit: keep must be "samples" or "all", not ${JSON.stringify(keep)}.`);
  if (tolerance !== undefined && !(tolerance >= 0)) throw new RangeError(`audit: tolerance must be a percentage from 0, not ${String(tolerance)}.`);
  if (duplicates !== undefined) suite.label(duplicates);
  for (const [symbol, stated] of Object.entries(sigma)) {
    suite.column(symbol);
    const size = 'percent' in stated ? stated.percent : stated.absolute;
    if (!(size > 0))
      throw new RangeError(`audit: sigma of ${symbol} must be { percent: … } or { absolute: … } above 0, not ${JSON.stringify(stated)}.`);
  }
}
