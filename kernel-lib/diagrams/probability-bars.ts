import { classify, findScheme, verdictOf, type ProbabilityMethod, type Scheme, type Uncertainty } from '../classify';
import type { IronBasis } from '../recast';
import { step, type Suite } from '../suite';
import { bibliography, shortSource } from '../tables';
import { drawable } from './chemical-text';
import type { Diagram } from './diagram';
import { figure, legendRoom } from './figure';
import type { Frame } from './frame';
import { groupScale } from './groups';
import { specNumber, unit, type Layer } from './layer';

/** What the bars take. */
export interface ProbabilityBarOptions {
  /** Names of the samples to show, top down (default: those least sure, at most 25). */
  readonly samples?: readonly string[];
  readonly iron?: IronBasis;
  readonly probability?: ProbabilityMethod;
  /** 1σ by analyte, where the suite has none. */
  readonly uncertainty?: Uncertainty;
  readonly draws?: number;
  readonly seed?: number;
  readonly title?: string;
  readonly width?: number;
}

const mostBars = 25;
/** A field that no sample shown reaches with this probability gets no colour of its own. */
const leastShare = 0.01;

/**
 * One bar a sample, divided by the probability of each field of a scheme: how sure a name or series is.
 *
 * @param suite n samples with 1σ, or with `uncertainty` given
 * @param which key of a scheme, or a scheme
 * @param options `samples`, `iron`, `probability`, `uncertainty`, `draws`, `seed`, `title`, `width`
 * @throws RangeError when no 1σ is known, or a sample is not in the suite
 * @example diagrams.probabilityBars(suite, 'tas', { uncertainty: { SiO2: { relative: 0.01 }, Na2O: { relative: 0.03 }, K2O: { relative: 0.03 } } })
 */
export function probabilityBars(suite: Suite, which: string | Scheme, options: ProbabilityBarOptions = {}): Diagram {
  const chosen = typeof which === 'string' ? findScheme(which) : which;
  const { samples, title, width, ...asking } = options;
  const verdicts = classify(suite, chosen, { probability: chosen.kind === 'criteria' ? 'sampled' : 'analytic', ...asking });
  const { probability } = verdictOf(verdicts, chosen.key);
  if (probability === undefined) {
    throw new RangeError(
      `probabilityBars: no 1σ is known for what "${chosen.key}" reads. Give uncertainty: { SiO2: { relative: 0.01 }, … }, or run the audit, which gives columns their 1σ.`,
    );
  }
  const rows = samples === undefined ? leastSure(probability.values) : samples.map((name) => rowOf(suite, name));
  if (rows.length === 0) throw new RangeError(`probabilityBars: no sample has a probability for "${chosen.key}": each lacks an analyte or its 1σ.`);
  const shown = chosen.fields.map((field, k) => ({ field, k })).filter(({ k }) => rows.some((i) => probability.values[k][i] >= leastShare));
  const rest = 'other';
  const hasRest = rows.some((i) => 1 - shown.reduce((sum, { k }) => sum + probability.values[k][i], 0) >= leastShare);
  const names = [...shown.map(({ field }) => drawable(field.name)), ...(hasRest ? [rest] : [])];
  const scale = groupScale('field', names, rest);
  const frame: Frame = {
    width: width ?? 420,
    height: Math.max(60, rows.length * 18),
    x: { title: 'probability (%)', window: [0, 100] },
    y: { title: '', window: [-0.5, rows.length - 0.5], names: rows.map((i) => drawable(suite.samples[i])), reversed: true },
  };
  const pieces = rows.flatMap((i, place) => {
    let from = 0;
    const parts = [
      ...shown.map(({ k, field }) => ({ name: drawable(field.name), share: probability.values[k][i] })),
      ...(hasRest ? [{ name: rest, share: NaN }] : []),
    ];
    return parts.flatMap(({ name, share }) => {
      const part = Number.isNaN(share) ? 1 - from : share;
      if (!(part > 0.001)) return [];
      const piece = {
        y: place - 0.38,
        y2: place + 0.38,
        x: specNumber(100 * from),
        x2: specNumber(100 * Math.min(1, from + part)),
        g: name,
        p: specNumber(100 * part),
        s: suite.samples[i],
      };
      from += part;
      return [piece];
    });
  });
  const layer: Layer = {
    draw: () => [
      unit(frame, { type: 'rect', opacity: 0.92, stroke: '#ffffff', strokeWidth: 0.7 }, pieces, {
        x2: { field: 'x2' },
        y2: { field: 'y2' },
        fill: { field: 'g', type: 'nominal', scale: scale.colours, legend: { ...scale.legend, symbolType: 'square' } },
        tooltip: [
          { field: 's', type: 'nominal', title: 'sample' },
          { field: 'g', type: 'nominal', title: 'field' },
          { field: 'p', type: 'quantitative', title: 'probability (%)', format: '.0f' },
        ],
      }),
    ],
  };
  const cited = chosen.sources.map((key) => (bibliography().has(key) ? shortSource(key) : key)).join('; ');
  const how =
    probability.method === 'analytic'
      ? 'from the errors of the analysis, moved through the recasting'
      : `from ${options.draws ?? 2000} drawn analyses a sample`;
  const others = suite.size - rows.length;
  const leftOut = samples === undefined ? 'surer than these' : 'not asked for';
  return figure({
    name: `${chosen.title}: probabilities`,
    title,
    panels: [{ frame, layers: [layer] }],
    caption: [`Probability of each field, ${how}. ${chosen.title}: ${cited}.`],
    counts: { plotted: rows.length, notPlotted: others, reasons: others > 0 ? { [leftOut]: others } : {} },
    legendWidth: legendRoom('field', names),
    lineage: [...verdicts.lineage, step('diagrams.probabilityBars', { scheme: chosen.key, samples: rows.length })],
  });
}

function rowOf(suite: Suite, name: string): number {
  const row = suite.samples.indexOf(name);
  if (row < 0)
    throw new RangeError(`probabilityBars: there is no sample "${String(name)}". The first names are: ${suite.samples.slice(0, 8).join(', ')}.`);
  return row;
}

/** Rows by how unlikely their likeliest field is, the least sure first. */
function leastSure(values: readonly Float64Array[]): number[] {
  const best = Array.from(values[0], (_, i) => Math.max(...values.map((each) => each[i])));
  return best
    .map((share, i) => ({ share, i }))
    .filter(({ share }) => Number.isFinite(share))
    .sort((a, b) => a.share - b.share)
    .slice(0, mostBars)
    .map(({ i }) => i);
}
