import { pattern, referenceComposition, usualReferences, type CaesiumLeadChoice, type PatternTable, type ReferenceComposition } from '../tracers';
import { cellState, step, type Suite } from '../suite';
import type { Diagram } from './diagram';
import { figure, legendRoom } from './figure';
import { windowAround, type Frame, type WindowChoice } from './frame';
import { groupSuite } from './groups';
import { mostMarkedCurves, seriesLayer, type SeriesShape } from './layers/series';
import { alteredSamples, checkSampleOptions, type SampleOptions } from './sample-points';

/** What patterns take, besides what all diagrams take. */
export interface PatternDiagramOptions extends Pick<SampleOptions, 'group' | 'altered' | 'title' | 'width' | 'height'> {
  /** What to divide by: key of a reservoir, a reservoir, or own values. */
  readonly reference?: ReferenceComposition;
  /** Key of an element order, or your own list of symbols. */
  readonly order?: string | readonly string[];
  /** One curve a sample, or one a group: median with a quantile band (default: samples up to 40 of them, then groups where `group` is given). */
  readonly curves?: 'samples' | 'groups';
  /** Lower and upper quantile of the band of a group (default 0.25 and 0.75). */
  readonly band?: readonly [number, number];
  readonly caesiumAndLead?: CaesiumLeadChoice;
  /** Keys of reservoirs drawn as dashed curves, e.g. `['n-morb-1989']`. */
  readonly also?: readonly string[];
  /** `{ y: [low, high] }`, or the data and a margin (default). */
  readonly window?: WindowChoice;
}

/**
 * Rare-earth patterns, normalised to chondrite.
 *
 * @param suite n samples with rare earths in ppm
 * @param options `group`, `curves`, `band`, `reference` (default `chondrite-c1-1989`), `also`, `window`, `title`, `width`, `height`
 * @throws RangeError for an unknown reference, label or option
 * @source Sun & McDonough 1989 (default reference)
 * @example diagrams.rareEarths(suite, { group: 'volcano' })
 */
export function rareEarths(suite: Suite, options: PatternDiagramOptions = {}): Diagram {
  return patternDiagram('rareEarths', suite, { order: 'rare-earths', ...options });
}

/**
 * Multi-element (spider) diagram, normalised to the primitive mantle.
 *
 * @param suite n samples, elements in ppm, oxides in wt % (K, Ti and P are taken from their oxides where need be)
 * @param options `group`, `curves`, `band`, `reference` (default `primitive-mantle-1989`), `order` (default `mantle-incompatibility-1989`),
 *   `also`, `window`, `title`, `width`, `height`
 * @throws RangeError for an unknown reference, order, label or option
 * @source Sun & McDonough 1989 (default reference and order)
 * @example diagrams.spider(suite, { reference: 'primitive-mantle-1989', group: 'volcano', also: ['n-morb-1989'] })
 */
export function spider(suite: Suite, options: PatternDiagramOptions = {}): Diagram {
  return patternDiagram('spider', suite, { order: 'mantle-incompatibility-1989', ...options });
}

const mostSampleCurves = 40;

function patternDiagram(who: string, suite: Suite, options: PatternDiagramOptions & { readonly order: string | readonly string[] }): Diagram {
  checkSampleOptions(who, suite, options);
  const { group, order, reference, band, caesiumAndLead, also = [] } = options;
  const curves = options.curves ?? (group !== undefined && suite.size > mostSampleCurves ? 'groups' : 'samples');
  if (curves !== 'samples' && curves !== 'groups') throw new RangeError(`${who}: curves must be "samples" or "groups", not "${String(curves)}".`);
  if (curves === 'groups' && group === undefined) throw new RangeError(`${who}: curves "groups" needs a label to group by, e.g. group: "volcano".`);
  const byGroup = curves === 'groups';
  const grouping = group === undefined || suite.size === 0 ? undefined : groupSuite(suite, group);
  // Groups are pooled as on every other figure, so that a group has one colour throughout.
  const grouped =
    byGroup && grouping !== undefined ? suite.withLabels({ [group!]: Array.from(grouping.index, (k) => grouping.scale.names[k]) }) : suite;
  const table = pattern(grouped, { order, ...defined({ reference, band, caesiumAndLead, group: byGroup ? group : undefined }) });
  const groups = grouping?.scale;
  const open = byGroup ? undefined : alteredSamples(suite, options.altered);
  const series = table.names.map((name, i): SeriesShape => {
    if (byGroup) return seriesOf(table, i, name, name);
    const made = seriesOf(table, i, name, grouping === undefined ? undefined : grouping.scale.names[grouping.index[i]]);
    return open?.[i] === 1 ? { ...made, open: true } : made;
  });
  const references = also.map((key) => referenceSeries(key, table, caesiumAndLead));
  const all = [...series, ...references.map(({ shape }) => shape)];
  const limits = typeof options.window === 'object' ? options.window.y : undefined;
  const shownValues = all.flatMap(({ values, limits: bounds, band: edges }) => [
    values,
    ...(bounds === undefined ? [] : [bounds]),
    ...(edges === undefined ? [] : [edges.low, edges.high]),
  ]);
  const count = table.elements.length;
  const divisor = shortReference(table.referenceName);
  const frame: Frame = {
    width: options.width ?? Math.max(320, Math.min(680, 24 * count + 90)),
    height: options.height ?? 340,
    x: { title: '', window: [-0.5, Math.max(0.5, count - 0.5)], names: table.elements },
    y: {
      title: `${byGroup ? 'Median' : 'Sample'} / ${divisor}`,
      scale: 'log',
      window: limits ?? windowAround(shownValues, { scale: 'log', whole: [1, 100], leastSpan: 10 }),
    },
  };
  const drawn = series.filter(({ values, limits: bounds }) => [...Array.from(values), ...Array.from(bounds ?? [])].some((value) => value > 0)).length;
  const hasLimits = series.some(({ limits: bounds }) => bounds !== undefined && Array.from(bounds).some((value) => value > 0));
  return figure({
    name: who === 'rareEarths' ? 'Rare-earth patterns' : 'Multi-element patterns',
    title: options.title,
    panels: [{ frame, layers: [seriesLayer(all, { groups, places: table.elements, valueTitle: `/ ${divisor}` })] }],
    caption: [
      `Normalised to ${table.referenceName}.`,
      ...(byGroup ? [`Curves are medians by ${group}; bands span quantiles ${table.band[0]} to ${table.band[1]}.`] : []),
      ...caesiumAndLeadNote(table, caesiumAndLead),
      ...(byGroup && grouping !== undefined && grouping.pooled > 0 ? [`The ${grouping.pooled} smallest groups are taken as one.`] : []),
      ...(hasGap(series) ? ['Dotted: across elements that were not measured.'] : []),
      ...(open?.includes(1) && series.length <= mostMarkedCurves ? ['Open symbols: flagged as altered.'] : []),
      ...(hasLimits ? ['Arrows: below detection, drawn at the limit.'] : []),
      ...(table.absent.length > 0 && suite.size > 0 ? [`Not in the data: ${table.absent.join(', ')}.`] : []),
      ...references.map(({ shape }) => `Dashed: ${shape.name}.`),
    ],
    counts: {
      plotted: drawn,
      notPlotted: series.length - drawn,
      reasons: series.length === drawn ? {} : { 'without any of the elements': series.length - drawn },
    },
    counted: byGroup ? 'group' : 'sample',
    legendWidth: groups === undefined ? 0 : legendRoom(groups.title, groups.names),
    lineage: [
      ...table.lineage,
      step(
        `diagrams.${who}`,
        { curves, also },
        { sources: [...new Set(references.flatMap(({ sources }) => sources))], ...(also.length > 0 ? { tables: ['reservoirs.csv'] } : {}) },
      ),
    ],
  });
}

function defined<Options extends object>(options: Options): { [Key in keyof Options]?: NonNullable<Options[Key]> } {
  return Object.fromEntries(Object.entries(options).filter(([, value]) => value !== undefined)) as {
    [Key in keyof Options]?: NonNullable<Options[Key]>;
  };
}

/** `C1 chondrite (Sun & McDonough 1989)` → `C1 chondrite`: the work stands in the caption. */
function shortReference(name: string): string {
  const short = name.replace(/\s*\([^)]*\)\s*$/, '');
  return /^[A-Z][a-z]/.test(short) ? short[0].toLowerCase() + short.slice(1) : short;
}

/** Two of the 1989 mantle's values come in two versions; a figure says which were taken. */
function caesiumAndLeadNote({ reference, normalised }: PatternTable, choice: CaesiumLeadChoice = 'plotting'): string[] {
  const pair = normalised.filter(({ element }) => element === 'Cs' || element === 'Pb').map(({ element, divisor }) => `${element} ${divisor}`);
  if (reference !== usualReferences.multiElement || pair.length === 0) return [];
  return [`${pair.join(' and ')} ppm ${choice === 'plotting' ? 'as its authors recommend for plotting' : 'from its table'}.`];
}

function seriesOf(table: PatternTable, row: number, name: string, group: string | undefined): SeriesShape {
  const pick = (from: (element: PatternTable['normalised'][number]) => Float64Array | undefined) =>
    Float64Array.from(table.normalised, (element) => from(element)?.[row] ?? NaN);
  const below = Float64Array.from(table.normalised, ({ states, limits }) => (states[row] === cellState.belowDetection ? limits[row] : NaN));
  return {
    name,
    values: pick(({ values }) => values),
    ...(below.some((value) => value > 0) ? { limits: below } : {}),
    ...(group === undefined ? {} : { group }),
    ...(table.curve === 'group' ? { band: { low: pick(({ low }) => low), high: pick(({ high }) => high) } } : {}),
  };
}

/** Whether a curve has a hole between two values, which a dotted bridge crosses. */
function hasGap(series: readonly SeriesShape[]): boolean {
  return series.some(({ values }) => {
    let last = -1;
    for (let i = 0; i < values.length; i++) {
      if (!(values[i] > 0)) continue;
      if (last >= 0 && i - last > 1) return true;
      last = i;
    }
    return false;
  });
}

/** A reservoir over the elements of a pattern, divided as the pattern is. */
function referenceSeries(
  key: string,
  table: PatternTable,
  caesiumAndLead: CaesiumLeadChoice | undefined,
): { readonly shape: SeriesShape; readonly sources: readonly string[] } {
  const { name, valueOf, sources } = referenceComposition(key, defined({ caesiumAndLead }));
  const values = Float64Array.from(table.normalised, ({ element, divisor }) => (valueOf(element) ?? NaN) / divisor);
  return { shape: { name, values, reference: true }, sources };
}
