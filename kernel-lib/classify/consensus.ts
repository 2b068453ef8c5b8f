import { showAs, type Showable, type TableCell } from '../display';
import type { IronSplitOptions } from '../recast';
import { joinLineages, step, type Step, type StepCarries, type Suite } from '../suite';
import { alterationFlags, movedFor } from './alteration';
import { operandsOf, type IronBasis } from './axes';
import { findScheme } from './catalogue';
import { classifyOptions, judge, schemesCarried } from './classify';
import { affinityKeys, immobileAffinity, type ImmobileAffinity } from './immobile-affinity';
import { nameWith, type RockNames } from './name-rocks';
import { probabilities, type ProbabilityMethod, type Uncertainty } from './probability';
import { probabilityText, verdictsOf, type SchemeVerdict, type Verdicts } from './verdicts';

/** How `consensus` works. */
export interface ConsensusOptions {
  readonly iron?: IronBasis;
  readonly normIron?: IronSplitOptions;
  readonly probability?: ProbabilityMethod | 'none';
  readonly uncertainty?: Uncertainty;
  readonly draws?: number;
  readonly seed?: number;
}

/** Names, series by every scheme, and one reading a sample (n). */
export interface Consensus extends Showable {
  readonly suite: Suite;
  readonly names: RockNames;
  readonly verdicts: Verdicts;
  readonly affinity: ImmobileAffinity;
  /** The audit's flags (n; '' = none); undefined when the suite was not audited. */
  readonly alteration?: readonly string[];
  /** Schemes that agree with the reading (n). */
  readonly agree: readonly string[];
  /** Schemes that speak against it (n). */
  readonly against: readonly string[];
  /** Schemes that could not be asked, and why (n). */
  readonly notAsked: readonly string[];
  /** The reading: `medium-K, calc-alkaline`; '' where nothing could be asked. */
  readonly reading: readonly string[];
  /** Why, in a sentence (n). */
  readonly because: readonly string[];
  readonly lineage: readonly Step[];
}

const keys = ['tas', 'potassium-silica', 'potassium-silica-1976', 'iron-enrichment', 'afm', 'alkalinity', 'alkalinity-nb-y'] as const;

/** What a scheme's field counts for in the question tholeiitic (−1) or calc-alkaline (+1). */
const series: Readonly<Record<string, Readonly<Record<string, number>>>> = { 'iron-enrichment': { TH: -1, CA: 1 }, afm: { TH: -1, CA: 1 } };
const affinityVote: Readonly<Record<string, number>> = { tholeiitic: -1, transitional: 0, 'calc-alkaline': 1 };

/** Names that rest on normative nepheline, and so can disagree with the dividing line. */
const basaltKinds = new Set(['alkali basalt', 'subalkali basalt']);

/** Weight of a scheme whose elements are flagged as moved, against 1: heard, but outvoted by any other. Our own choice. */
const movedWeight = 0.25;
/** Share of the weight that must be on one side for a reading: two of three. Our own choice. */
const clearMajority = 1 / 3 - 1e-9;

/**
 * One table of what a suite is: a row a sample, with its IUGS name, the series by every scheme, which agree, which could not be asked and
 * why, the audit's alteration flags, and an overall reading with its reasons.
 *
 * A scheme that rests on an element flagged as moved (label `alteration`) counts a quarter; where 1σ is known, a scheme counts by how
 * likely its field is. The reading needs two thirds of the weight, else it is "between".
 *
 * @param suite n samples; oxides in wt %, elements in ppm; label `alteration` from the audit where there is one
 * @param options as for `classify` and `nameRocks`
 * @returns names, verdicts, agreement and readings (n)
 * @source the works named by each scheme
 * @example consensus(suite)
 */
export function consensus(suite: Suite, options: ConsensusOptions = {}): Consensus {
  const { normIron = {}, ...rest } = options;
  const settings = classifyOptions(rest, 'consensus');
  const operands = operandsOf(suite, settings.iron);
  const names = nameWith(operands, normIron, 'flag');
  const found = new Map<string, SchemeVerdict>(
    keys.map((key) => [key, key === 'tas' ? names.tas : key === 'potassium-silica' ? names.potassium : judge(operands, findScheme(key))]),
  );
  const chance = probabilities(suite, [...found.values()], settings);
  for (const [key, probability] of chance.byScheme) found.set(key, { ...found.get(key)!, probability });
  const affinity = immobileAffinity(suite);
  const flags = alterationFlags(suite);
  const text = () => new Array<string>(suite.size).fill('');
  const [agree, against, notAsked, reading, because] = [text(), text(), text(), text(), text()];
  const readings = new Map<string, Reading>();
  const all = [...found.values()];
  const weighed = all.some(({ probability }) => probability !== undefined);
  for (let i = 0; i < suite.size; i++) {
    // Rows that all schemes answer alike read alike; only probabilities make every row its own.
    const root = basaltKinds.has(names.roots[i]) ? names.roots[i] : '';
    const key = weighed ? '' : `${root}|${situation(all, affinity, flags, i)}`;
    let row = weighed ? undefined : readings.get(key);
    if (row === undefined) {
      row = readRow(i, found, affinity, flags?.[i] ?? '', root);
      if (!weighed) readings.set(key, row);
    }
    agree[i] = row.agree;
    against[i] = row.against;
    notAsked[i] = row.notAsked;
    reading[i] = row.reading;
    because[i] = row.because;
  }
  const made = step(
    'consensus',
    { iron: settings.iron, movedWeight, clearMajority: 'two thirds of the weight', audited: flags !== undefined, ...chance.detail },
    consensusCarried(),
  );
  const lineage = [...joinLineages(names.lineage, affinity.lineage), made];
  const result = {
    suite,
    names,
    verdicts: verdictsOf(suite, found, lineage),
    affinity,
    alteration: flags,
    agree,
    against,
    notAsked,
    reading,
    because,
    lineage,
  };
  return showAs(result, consensusTable);
}

function consensusCarried(): StepCarries {
  const carried = schemesCarried([...keys, ...affinityKeys].map(findScheme));
  const rule = 'A series was read where two thirds of them agree; schemes that rest on elements flagged as moved counted a quarter.';
  return { ...carried, says: `${carried.says} ${rule}` };
}

/** What one row says, in words. */
interface Reading {
  readonly agree: string;
  readonly against: string;
  readonly notAsked: string;
  readonly reading: string;
  readonly because: string;
}

/** Everything that a reading rests on where no probabilities weigh in: fields, reasons for none, flag. */
function situation(all: readonly SchemeVerdict[], affinity: ImmobileAffinity, flags: readonly string[] | undefined, i: number): string {
  let packed = 0;
  let reasons = '';
  for (const { field, remarks } of all) {
    packed = packed * 16 + field[i] + 1;
    if (field[i] < 0) reasons += `|${remarks[i]}`;
  }
  return `${packed}|${affinity.affinity[i] === '' ? affinity.because[i] : affinity.affinity[i]}|${flags === undefined ? '' : flags[i]}${reasons}`;
}

interface Voice {
  readonly who: string;
  /** −1 tholeiitic … +1 calc-alkaline. */
  readonly vote: number;
  readonly weight: number;
}

function readRow(i: number, found: ReadonlyMap<string, SchemeVerdict>, affinity: ImmobileAffinity, flag: string, basalt: string): Reading {
  const notAsked: string[] = [];
  const setBack: string[] = [];
  const voices: Voice[] = [];
  const weightOf = (verdict: SchemeVerdict, who: string): number => {
    const moved = movedFor(verdict.scheme, flag);
    if (moved.length > 0) setBack.push(`${who} (${moved.join(', ')} moved)`);
    const sure = verdict.probability?.values[verdict.field[i]]?.[i] ?? NaN;
    return (moved.length > 0 ? movedWeight : 1) * (Number.isFinite(sure) ? sure : 1);
  };
  const alkalinity = found.get('alkalinity')!;
  const immobile = found.get('alkalinity-nb-y')!;
  const alkaline: Voice[] = [];
  for (const [verdict, who] of [
    [alkalinity, 'alkalinity'],
    [immobile, 'Nb/Y'],
  ] as const) {
    // Nb/Y is a guide for altered rocks; on a fresh one the alkalis themselves speak.
    if (who === 'Nb/Y' && flag === '') continue;
    if (verdict.field[i] < 0) notAsked.push(`${who}: ${verdict.remarks[i]}`);
    else alkaline.push({ who, vote: verdict.symbols[i] === 'A' ? 1 : -1, weight: weightOf(verdict, who) });
  }
  const isAlkaline = alkaline.length > 0 && alkaline.reduce((sum, { vote, weight }) => sum + vote * weight, 0) > 0;
  for (const [key, votes] of Object.entries(series)) {
    const verdict = found.get(key)!;
    const who = key === 'afm' ? 'AFM' : 'FeO*/MgO';
    if (verdict.field[i] < 0) notAsked.push(`${who}: ${verdict.remarks[i]}`);
    else voices.push({ who, vote: votes[verdict.symbols[i]], weight: weightOf(verdict, who) });
  }
  if (affinity.affinity[i] === '') notAsked.push(`immobile elements: ${affinity.because[i]}`);
  else voices.push({ who: 'immobile elements', vote: affinityVote[affinity.affinity[i]], weight: 1 });
  const weight = voices.reduce((sum, voice) => sum + voice.weight, 0);
  const balance = voices.reduce((sum, voice) => sum + voice.weight * voice.vote, 0) / weight;
  const side = !(weight > 0) ? undefined : balance > clearMajority ? 1 : balance < -clearMajority ? -1 : 0;
  const sideName = side === undefined ? '' : side > 0 ? 'calc-alkaline' : side < 0 ? 'tholeiitic' : 'between tholeiitic and calc-alkaline';
  const potassium = found.get('potassium-silica')!;
  const potassic = potassium.field[i] < 0 ? '' : potassium.names[i];
  const potassiumMoved = potassic !== '' && movedFor(potassium.scheme, flag).length > 0;
  if (potassium.field[i] < 0) notAsked.push(`potassium: ${potassium.remarks[i]}`);
  else if (potassiumMoved) setBack.push('potassium (K2O moved)');
  const agree = side === undefined || isAlkaline ? [] : voices.filter(({ vote }) => vote === side).map(({ who }) => who);
  const against =
    side === undefined || isAlkaline ? [] : voices.filter(({ vote }) => vote !== side && (side !== 0 || vote !== 0)).map(({ who }) => who);
  const parts = isAlkaline ? ['alkaline'] : [potassiumMoved ? '' : potassic, sideName];
  const reading = parts.filter((part) => part !== '').join(', ');
  const written = { agree: agree.join(', '), against: against.join(', '), notAsked: notAsked.join('; ') };
  return { ...written, reading, because: sentence({ isAlkaline, alkaline, voices, side, agree, against, setBack, flag, sideName, basalt }) };
}

const sideWords = ['tholeiitic', 'transitional', 'calc-alkaline'];

function sentence(from: {
  isAlkaline: boolean;
  alkaline: readonly Voice[];
  voices: readonly Voice[];
  side: number | undefined;
  agree: readonly string[];
  against: readonly string[];
  setBack: readonly string[];
  flag: string;
  sideName: string;
  basalt: string;
}): string {
  const { isAlkaline, alkaline, voices, side, agree, against, setBack, flag, sideName, basalt } = from;
  const parts: string[] = [];
  if (isAlkaline)
    parts.push(
      `alkaline by ${alkaline
        .filter(({ vote }) => vote > 0)
        .map(({ who }) => who)
        .join(' and ')}, so the subalkaline series are not asked`,
    );
  else if (side === undefined) parts.push('no scheme of the subalkaline series could be asked');
  else if (side === 0) parts.push(`${voices.map(({ who, vote }) => `${who} ${sideWords[Math.sign(vote) + 1]}`).join(', ')}: no clear majority`);
  else parts.push(`${sideName} by ${agree.join(', ')}${against.length === 0 ? '' : `, against ${against.join(', ')}`}`);
  if (basalt === 'alkali basalt' && !isAlkaline) parts.push('its norm has nepheline, so the IUGS name is alkali basalt all the same');
  if (basalt === 'subalkali basalt' && isAlkaline) parts.push('its norm has no nepheline, so the IUGS name is subalkali basalt all the same');
  if (flag !== '') parts.push(`flagged as altered (${flag})${setBack.length === 0 ? '' : `; counted less: ${setBack.join(', ')}`}`);
  const [first] = parts;
  return `${first[0].toUpperCase()}${first.slice(1)}${parts.length > 1 ? `; ${parts.slice(1).join('; ')}` : ''}.`;
}

function consensusTable(made: Omit<Consensus, 'toMimeBundle'>) {
  const { suite, names, verdicts, affinity, alteration, agree, against, notAsked, reading, because } = made;
  const tas = verdicts.schemes.get('tas')!;
  const sure = tas.probability !== undefined;
  const by = (key: string, i: number) => verdicts.schemes.get(key)!.symbols[i];
  const rows = Array.from({ length: Math.min(60, suite.size) }, (_, i): TableCell[] => [
    suite.samples[i],
    names.names[i] === '' ? 'not named' : names.names[i],
    ...(sure ? [probabilityText(tas, i)] : []),
    by('potassium-silica', i),
    by('potassium-silica-1976', i),
    by('iron-enrichment', i),
    by('afm', i),
    by('alkalinity', i),
    affinity.affinity[i],
    reading[i],
    agree[i],
    against[i],
    notAsked[i],
    alteration?.[i] ?? '',
    because[i],
  ]);
  return {
    title: 'Names and series',
    columns: [
      'sample',
      'name',
      ...(sure ? ['TAS: how sure'] : []),
      'K2O',
      'K2O 1976',
      'FeO*/MgO',
      'AFM',
      'alkalinity',
      'immobile',
      'reading',
      'agree',
      'against',
      'not asked',
      'altered',
      'because',
    ],
    rows,
    totalRows: suite.size,
    notes: [
      ...(alteration === undefined ? ['The suite has no label "alteration": it was not audited, and no scheme was counted less.'] : []),
      'low, medium, high: potassium (Le Maitre et al. 2002); IAT, CA, HKCA, SHO: Peccerillo & Taylor 1976.',
      'TH, CA: Miyashiro 1974 and Irvine & Baragar 1971; S, A: subalkaline, alkaline.',
    ],
  };
}
