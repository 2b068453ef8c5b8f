import { step, type Suite } from '../suite';
import { mantleArray, ratio, referenceComposition, usualReferences } from '../tracers';
import { axisTitle } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { checkWindow, windowAround, type Frame } from './frame';
import { bandsLayer, linesLayer, type BandShape, type LineShape } from './layers/lines';
import { markersLayer, pathsLayer } from './layers/markers';
import { namesLayer } from './layers/names';
import { samplesLayer } from './layers/samples';
import { pathShapes, type PathInput } from './model-paths';
import { reservoirMarks } from './reservoir-markers';
import { samplePoints, type SampleOptions } from './sample-points';

/** The ready tracer plots, by the ratio that gives them their point. */
export const tracerPlotNames = [
  'barium-thorium',
  'thorium-niobium',
  'barium-lanthanum',
  'uranium-thorium',
  'cerium-lead',
  'strontium-yttrium',
] as const;
export type TracerPlotName = (typeof tracerPlotNames)[number];

/** What a tracer plot takes, besides what all diagrams take. */
export interface TracerPlotOptions extends SampleOptions {
  /** Keys of the reservoirs that are marked (default: those of the plot; `[]` for none). */
  readonly reservoirs?: readonly string[];
  /** Paths of models, such as `mix`. */
  readonly paths?: readonly PathInput[];
}

interface TracerPlot {
  readonly x: string;
  readonly y: string;
  readonly reservoirs: readonly string[];
  /** How to read it, for the caption. */
  readonly reads: string;
  readonly sources: readonly string[];
}

const basalts = ['n-morb-1989', 'e-morb-1989', 'oib-1989'] as const;
const sediment = 'subducting-sediment-1998';

const plots: Readonly<Record<TracerPlotName, TracerPlot>> = {
  'barium-thorium': {
    x: '(La/Sm)N',
    y: 'Ba/Th',
    reservoirs: ['n-morb-1989', sediment],
    reads: 'Fluid raises Ba/Th; sediment melt raises La/Sm.',
    sources: [],
  },
  'thorium-niobium': { x: 'Nb/Yb', y: 'Th/Yb', reservoirs: [...basalts, sediment], reads: '', sources: ['pearce_2008'] },
  'barium-lanthanum': {
    x: 'Th/Yb',
    y: 'Ba/La',
    reservoirs: ['n-morb-1989', 'e-morb-1989', sediment],
    reads: 'Fluid raises Ba/La; sediment melt raises Th/Yb.',
    sources: [],
  },
  'uranium-thorium': {
    x: 'Th/Nb',
    y: 'U/Th',
    reservoirs: ['n-morb-1989', sediment],
    reads: 'Oxidised fluid raises U/Th; sediment melt raises Th/Nb.',
    sources: [],
  },
  'cerium-lead': {
    x: 'Ba/La',
    y: 'Ce/Pb',
    reservoirs: ['n-morb-1989', 'oib-1989', sediment],
    reads: 'Fluid lowers Ce/Pb and raises Ba/La.',
    sources: ['hofmann_1986'],
  },
  'strontium-yttrium': {
    x: 'La/Yb',
    y: 'Sr/Y',
    reservoirs: ['n-morb-1989', sediment],
    reads: 'Garnet or amphibole in the residue raises both.',
    sources: [],
  },
};

/** Ce/Pb of oceanic basalts, 25 ± 5 (Hofmann et al. 1986). */
const oceanicCeriumLead = [20, 30] as const;

/**
 * A ratio–ratio plot for tracing slab components, on log axes, with reservoirs marked: `barium-thorium` (Ba/Th–(La/Sm)N), `thorium-niobium`
 * (Th/Yb–Nb/Yb with the oceanic-basalt array), `barium-lanthanum` (Ba/La–Th/Yb), `uranium-thorium` (U/Th–Th/Nb), `cerium-lead` (Ce/Pb–Ba/La
 * with the range of oceanic basalts), `strontium-yttrium` (Sr/Y–La/Yb).
 *
 * @param suite n samples with the trace elements of the plot in ppm
 * @param name which plot
 * @param options `group`, `reservoirs`, `paths`, and what all diagrams take
 * @throws RangeError for an unknown plot or reservoir; ExpressionError when the suite lacks an element
 * @source Pearce 2008 (Th/Yb–Nb/Yb); Hofmann et al. 1986 (Ce/Pb 25 ± 5); the others common practice
 * @example diagrams.tracerPlot(suite, 'thorium-niobium', { group: 'volcano' })
 */
export function tracerPlot(suite: Suite, name: TracerPlotName, options: TracerPlotOptions = {}): Diagram {
  if (!(tracerPlotNames as readonly string[]).includes(name))
    throw new RangeError(`tracerPlot: there is no plot "${String(name)}". Known: ${tracerPlotNames.join(', ')}.`);
  const plot = plots[name];
  const chondrite = referenceComposition(usualReferences.rareEarths);
  const reference = (symbol: string) => chondrite.valueOf(symbol) ?? NaN;
  const marks = reservoirMarks(options.reservoirs ?? plot.reservoirs, { ...plot, reference });
  const values = [plot.x, plot.y].map((expression) => ratio(suite, expression, { sigma: false }).values);
  const positions = (['x', 'y'] as const).map((side) => marks.markers.map((mark) => mark[side]));
  checkWindow('tracerPlot', options.window);
  const chosen = typeof options.window === 'object' ? options.window : {};
  const window = {
    x: chosen.x ?? windowAround([values[0], positions[0]], { scale: 'log' }),
    y: chosen.y ?? windowAround([values[1], positions[1], name === 'cerium-lead' ? oceanicCeriumLead : []], { scale: 'log' }),
  };
  const { bands, lines, caption } = linesOf(name, window);
  const normalised = plot.x.includes(')N');
  const titles = [axisTitle(plot.x), axisTitle(plot.y)] as const;
  const set = samplePoints('tracerPlot', suite, { x: plot.x, y: plot.y, reference, axisTitles: titles }, options);
  const { shapes: paths, notes } = pathShapes('tracerPlot', options.paths, (liquid) => ({
    x: ratio(liquid, plot.x, { sigma: false }).values,
    y: ratio(liquid, plot.y, { sigma: false }).values,
  }));
  const frame: Frame = {
    width: options.width ?? 440,
    height: options.height ?? 360,
    x: { title: titles[0], scale: 'log', window: window.x },
    y: { title: titles[1], scale: 'log', window: window.y },
  };
  const sources = [...plot.sources, ...(normalised ? chondrite.sources : []), ...marks.sources];
  const because = step(
    'diagrams.tracerPlot',
    { name, x: plot.x, y: plot.y, reservoirs: marks.markers.map(({ label }) => label) },
    {
      sources: [...new Set(sources)],
      tables: ['reservoirs.csv'],
      fromMemory: normalised ? chondrite.fromMemory(['La', 'Sm']) : [],
    },
  );
  return figure({
    name: `${titles[1]} against ${titles[0]}`,
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          bandsLayer(bands),
          linesLayer(lines),
          samplesLayer(set.points, options),
          ...(options.names === undefined ? [] : [namesLayer(set.points, suite.samples, options.names)]),
          pathsLayer(paths),
          markersLayer(marks.markers),
        ],
      },
    ],
    caption: [plot.reads, caption, normalised ? `N: normalised to ${chondrite.name}.` : '', marks.caption, ...notes, ...set.notes].filter(
      (text) => text !== '',
    ),
    counts: set.counts(frame),
    legendWidth: set.legendWidth,
    lineage: [...suite.lineage, ...(marks.suite?.lineage ?? []), because],
  });
}

interface PlotLines {
  /** Shaded, so that names can stand on it. */
  readonly bands: readonly BandShape[];
  readonly lines: readonly LineShape[];
  readonly caption: string;
}

function linesOf(name: TracerPlotName, { x: [low, high] }: { readonly x: readonly [number, number] }): PlotLines {
  if (name === 'thorium-niobium') {
    const { slope, intercept, scatter } = mantleArray('Th')!;
    const at = (x: number, shift: number) => 10 ** (intercept + shift + slope * Math.log10(x));
    const ends = [low, high];
    return {
      bands: [{ x: ends, low: ends.map((x) => at(x, -2 * scatter)), high: ends.map((x) => at(x, 2 * scatter)) }],
      lines: [{ points: ends.map((x) => [x, at(x, 0)] as const), label: 'oceanic-basalt array' }],
      caption:
        `Array: line through N-MORB and OIB, shaded ± 2σ of other oceanic basalts (${(2 * scatter).toFixed(2)} log units); ` +
        'slab input or crust raises Th/Yb above it.',
    };
  }
  if (name === 'cerium-lead') {
    const level = (y: number): LineShape['points'] => [
      [low, y],
      [high, y],
    ];
    return {
      bands: [],
      lines: [
        { points: level(oceanicCeriumLead[1]), dash: [4, 3] },
        { points: level(oceanicCeriumLead[0]), dash: [4, 3], label: 'oceanic basalts 25 ± 5' },
      ],
      caption: 'Oceanic basalts: Ce/Pb 25 ± 5 (Hofmann et al. 1986).',
    };
  }
  return { bands: [], lines: [], caption: '' };
}
