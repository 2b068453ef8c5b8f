import { fertilityIndicators, type FertilityIndicator, type FertilityScreen } from '../fertility';
import { volatileFree } from '../recast';
import { evaluate, step, type Column, type Step, type Suite } from '../suite';
import { reservoir, shortSource } from '../tables';
import { axisTitle } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { windowAround, type Frame } from './frame';
import type { Point } from './geometry';
import { groupScale, type GroupScale } from './groups';
import { curve, linesLayer, type LineShape } from './layers/lines';
import { namesLayer } from './layers/names';
import { samplesLayer } from './layers/samples';
import { samplePoints, type SampleOptions } from './sample-points';

/** A suite, or a suite that was screened: then guarded samples are open, and groups are coloured by verdict unless another label is asked for. */
export type Screened = Suite | FertilityScreen;

/** Verdicts in the order in which they are read; those against are drawn in grey, under the others. */
const verdictOrder = ['supported', 'undecided', 'cannot be asked', 'in no group', 'not supported'];

/** @internal The scale of verdicts that occur, and the number of each sample's verdict in it. */
export function verdictGroups(verdicts: readonly string[]): { readonly groups: GroupScale; readonly group: Uint16Array } {
  const names = verdictOrder.filter((name) => verdicts.includes(name));
  return { groups: groupScale('verdict', names, 'not supported'), group: Uint16Array.from(verdicts, (verdict) => names.indexOf(verdict)) };
}

const isScreen = (of: Screened): of is FertilityScreen =>
  Array.isArray((of as FertilityScreen).groups) && Array.isArray((of as FertilityScreen).guards);

interface Subject {
  readonly suite: Suite;
  readonly options: SampleOptions;
  readonly lineage: readonly Step[];
  readonly notes: (notes: readonly string[]) => readonly string[];
}

/** The suite to draw, and the options that a screening brings along. */
function subjectOf(of: Screened, options: SampleOptions): Subject {
  if (typeof of !== 'object' || of === null || !isScreen(of)) {
    const suite = of as Suite;
    return { suite, options, lineage: suite?.lineage ?? [], notes: (notes) => notes };
  }
  const verdicts = new Map(of.groups.map(({ group, verdict }) => [group, verdict as string]));
  const texts = of.suite.label(of.label).map((group) => verdicts.get(group) ?? 'in no group');
  const rows = Array.from(texts, (_, i) => i).sort((i, j) => verdictOrder.indexOf(texts[j]) - verdictOrder.indexOf(texts[i]) || i - j);
  const suite = of.suite.withLabels({ verdict: texts }).rows(rows);
  const guards = of.guards.filter(({ guard }) => guard.effect !== 'caution');
  const altered = rows.map((i) => guards.some(({ flags }) => flags[i] === 1));
  return {
    suite,
    options: { group: 'verdict', altered, ...options },
    lineage: of.lineage,
    notes: (notes) =>
      notes.map((note) =>
        note === 'Open symbols: flagged as altered.'
          ? 'Open symbols: altered, weathered, cumulate or with a total out of range, so not counted.'
          : note,
      ),
  };
}

function indicator(key: string): FertilityIndicator {
  return fertilityIndicators().find((each) => each.key === key)!;
}

/** The limit of one of an indicator's conditions as a number. */
function limitOf(key: string, expression: string): number {
  return Number(indicator(key).conditions.find((condition) => condition.expression === expression)!.limit);
}

const cited = (key: string) => shortSource(indicator(key).source);
const right = (frame: Frame) => frame.x.window[1];
const top = (frame: Frame) => frame.y.window[1];

/** What one of these diagrams draws. */
interface Plan {
  readonly who: string;
  readonly name: string;
  readonly x: string;
  readonly y: string;
  readonly titles: readonly [string, string];
  readonly columns?: (suite: Suite) => { readonly x: Column; readonly y: Column };
  readonly reference?: (symbol: string) => number;
  /** The criteria, once the window is known. */
  readonly lines: (frame: Frame) => readonly LineShape[];
  /** Values that the window takes in besides the samples, so that the criteria are seen. */
  readonly also: { readonly x: readonly number[]; readonly y: readonly number[] };
  readonly caption: readonly string[];
  readonly criteria: readonly string[];
}

function draw(of: Screened, given: SampleOptions, plan: Plan): Diagram {
  const { suite, options, lineage, notes } = subjectOf(of, given);
  const { who, name, x, y, titles, reference, lines, also } = plan;
  const columns = plan.columns === undefined || typeof suite !== 'object' || suite === null ? undefined : plan.columns(suite);
  const set = samplePoints(who, suite, { x, y, reference, axisTitles: titles, ...(columns === undefined ? {} : { columns }) }, options);
  const points =
    options.group === 'verdict' && suite.labels.has('verdict') ? { ...set.points, ...verdictGroups(suite.label('verdict')) } : set.points;
  const chosen = typeof options.window === 'object' ? options.window : {};
  const frame: Frame = {
    width: options.width ?? 480,
    height: options.height ?? 360,
    x: { title: titles[0], window: chosen.x ?? windowAround([set.points.x, also.x], { within: [0, Infinity] }) },
    y: { title: titles[1], window: chosen.y ?? windowAround([set.points.y, also.y], { within: [0, Infinity] }) },
  };
  const sources = [...new Set(plan.criteria.map((key) => indicator(key).source))];
  return figure({
    name,
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          linesLayer(lines(frame)),
          samplesLayer(points, options),
          ...(options.names === undefined ? [] : [namesLayer(points, suite.samples, options.names)]),
        ],
      },
    ],
    caption: [...plan.caption, ...notes(set.notes), 'Whole-rock chemistry screens suites; it does not find ore.'],
    counts: set.counts(frame),
    legendWidth: set.legendWidth,
    lineage: [...lineage, step(`diagrams.${who}`, { x, y }, { sources, tables: ['fertility/indicators.json'] })],
  });
}

/** Silica on the volatile-free basis, and another quantity as reported. */
function againstSilica(y: string): (suite: Suite) => { x: Column; y: Column } {
  return (suite) => ({ x: (suite.has('SumAsGiven') ? suite : volatileFree(suite, { iron: 'measured' })).column('SiO2'), y: evaluate(suite, y) });
}

/**
 * Sr/Y against Y, with the screening criteria that stand on it.
 *
 * @param of n samples with Sr and Y (ppm), or a screening of them: then guarded samples are open and the colour is the verdict on the group
 * @param options as every diagram of samples: `group`, `window`, `altered`, `errors`, `names`, `title`, `width`, `height`
 * @throws RangeError for a bad option; ExpressionError for a suite without Sr or Y
 * @source Drummond & Defant 1990; Richards 2011; Loucks 2014
 * @example diagrams.strontiumYttrium(suite, { group: 'volcano' })
 */
export function strontiumYttrium(of: Screened, options: SampleOptions = {}): Diagram {
  const [box, edge] = [limitOf('sr-y-box-1990', 'Sr/Y'), limitOf('sr-y-box-1990', 'Y')];
  const [strict, loose] = [limitOf('sr-y-2014', 'Sr/Y'), limitOf('sr-y-2011', 'Sr/Y')];
  const across = (frame: Frame, y: number): Point[] => [
    [0, y],
    [right(frame), y],
  ];
  return draw(of, options, {
    who: 'strontiumYttrium',
    name: 'Sr/Y–Y diagram',
    x: 'Y',
    y: 'Sr/Y',
    titles: [axisTitle('Y', 'ppm'), axisTitle('Sr/Y')],
    lines: (frame) => [
      { points: across(frame, loose), label: `Sr/Y ${loose} (${cited('sr-y-2011')})` },
      { points: across(frame, strict), label: `Sr/Y ${strict} (${cited('sr-y-2014')})` },
      {
        points: [
          [0, box],
          [edge, box],
          [edge, top(frame)],
        ],
        label: `Sr/Y ${box} and Y ${edge} (${cited('sr-y-box-1990')})`,
        dash: [5, 3],
      },
    ],
    also: { x: [0, edge], y: [0, box] },
    criteria: ['sr-y-box-1990', 'sr-y-2014', 'sr-y-2011'],
    caption: [
      `Lines: Sr/Y ${loose} (${cited('sr-y-2011')}), ${strict} above 57 % SiO₂ (${cited('sr-y-2014')}).`,
      `Dashed: high Sr/Y box (${cited('sr-y-box-1990')}). Limits recalled from these works.`,
    ],
  });
}

/**
 * (La/Yb)N against YbN, chondrite-normalised, with the high-Sr/Y (adakite-like) limits.
 *
 * @param of n samples with La and Yb (ppm), or a screening of them
 * @param options as every diagram of samples
 * @throws RangeError for a bad option; ExpressionError for a suite without La or Yb
 * @source Martin 1986; chondrite: Sun & McDonough 1989
 * @example diagrams.lanthanumYtterbium(suite, { group: 'volcano' })
 */
export function lanthanumYtterbium(of: Screened, options: SampleOptions = {}): Diagram {
  const [ratio, edge] = [limitOf('la-yb-1986', '(La/Yb)N'), limitOf('la-yb-1986', 'YbN')];
  const chondrite = reservoir('chondrite-c1-1989').values;
  return draw(of, options, {
    who: 'lanthanumYtterbium',
    name: '(La/Yb)N–YbN diagram',
    x: 'YbN',
    y: '(La/Yb)N',
    titles: [axisTitle('YbN'), axisTitle('(La/Yb)N')],
    reference: (symbol) => chondrite.get(symbol)?.value ?? NaN,
    lines: (frame) => [
      {
        points: [
          [0, ratio],
          [edge, ratio],
          [edge, top(frame)],
        ],
        label: `(La/Yb)ɴ ${ratio} and Ybɴ ${edge} (${cited('la-yb-1986')})`,
        dash: [5, 3],
      },
    ],
    also: { x: [0, edge], y: [0, ratio] },
    criteria: ['la-yb-1986'],
    caption: [
      `Dashed: garnet or amphibole signature (${cited('la-yb-1986')}; about these values, recalled; its curved outlines are not carried).`,
      `Chondrite: ${shortSource('sun_mcdonough_1989')}.`,
    ],
  });
}

/**
 * V/Sc against silica, with the line of copper-ore-forming arc magmas.
 *
 * @param of n samples with V and Sc (ppm) and all major oxides (wt %; recast to volatile-free), or a screening of them
 * @param options as every diagram of samples
 * @throws RangeError for a bad option; ExpressionError for a suite without V or Sc
 * @source Loucks 2014
 * @example diagrams.vanadiumScandium(suite, { group: 'volcano' })
 */
export function vanadiumScandium(of: Screened, options: SampleOptions = {}): Diagram {
  const from = indicator('v-sc-2014').silica.over!;
  const { limit } = indicator('v-sc-2014').conditions[0];
  const [intercept, slope] = /^([\d.]+)-([\d.]+)\*SiO2$/.exec(limit)!.slice(1).map(Number);
  return draw(of, options, {
    who: 'vanadiumScandium',
    name: 'V/Sc–silica diagram',
    x: 'SiO2',
    y: 'V/Sc',
    titles: [axisTitle('SiO2', 'wt%', 'volatile-free'), axisTitle('V/Sc')],
    columns: againstSilica('V/Sc'),
    lines: (frame) => [
      { points: curve(frame, (silica) => intercept - slope * silica, from), label: cited('v-sc-2014') },
      {
        points: [
          [from, frame.y.window[0]],
          [from, top(frame)],
        ],
        dash: [2, 3],
      },
    ],
    also: { x: [from, from + 10], y: [0, intercept - slope * from] },
    criteria: ['v-sc-2014'],
    caption: [`Line: V/Sc = ${intercept} − ${slope} SiO₂, asked above ${from} % SiO₂ (${cited('v-sc-2014')}; recalled).`],
  });
}

/**
 * Sr/Y against silica, with the criteria and their silica windows.
 *
 * @param of n samples with Sr and Y (ppm) and all major oxides (wt %; recast to volatile-free), or a screening of them
 * @param options as every diagram of samples
 * @throws RangeError for a bad option; ExpressionError for a suite without Sr or Y
 * @source Loucks 2014; Richards 2011
 * @example diagrams.strontiumYttriumSilica(suite, { group: 'volcano' })
 */
export function strontiumYttriumSilica(of: Screened, options: SampleOptions = {}): Diagram {
  const [strict, loose] = [limitOf('sr-y-2014', 'Sr/Y'), limitOf('sr-y-2011', 'Sr/Y')];
  const [strictFrom, looseFrom] = [indicator('sr-y-2014').silica.over!, indicator('sr-y-2011').silica.from!];
  const box = (frame: Frame, from: number, y: number): Point[] => [
    [from, top(frame)],
    [from, y],
    [right(frame), y],
  ];
  return draw(of, options, {
    who: 'strontiumYttriumSilica',
    name: 'Sr/Y–silica diagram',
    x: 'SiO2',
    y: 'Sr/Y',
    titles: [axisTitle('SiO2', 'wt%', 'volatile-free'), axisTitle('Sr/Y')],
    columns: againstSilica('Sr/Y'),
    lines: (frame) => [
      { points: box(frame, strictFrom, strict), label: `Sr/Y ${strict} (${cited('sr-y-2014')})` },
      { points: box(frame, looseFrom, loose), label: `Sr/Y ${loose} (${cited('sr-y-2011')})`, dash: [5, 3] },
    ],
    also: { x: [looseFrom, looseFrom + 10], y: [0, strict] },
    criteria: ['sr-y-2014', 'sr-y-2011'],
    caption: [
      `Lines: Sr/Y ${strict} above ${strictFrom} % SiO₂ (${cited('sr-y-2014')}).`,
      `Dashed: Sr/Y ${loose} (${cited('sr-y-2011')}) from ${looseFrom} % SiO₂, the window of the high-Sr/Y criteria. Limits recalled from these works.`,
    ],
  });
}
