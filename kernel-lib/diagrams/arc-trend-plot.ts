import type { ArcTrend } from '../margin';
import { step } from '../suite';
import { axisTitle, dressText, expressionText, symbolText } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { windowAround, type Frame } from './frame';
import { bandsLayer, linesLayer } from './layers/lines';
import { namesLayer } from './layers/names';
import { samplesLayer, type SamplePoints } from './layers/samples';
import { groupColours, ink } from './theme';

/** What the plot of a trend takes. */
export interface ArcTrendPlotOptions {
  /** Volcanoes to name (default: all). */
  readonly names?: readonly string[] | 'all';
  readonly title?: string;
  readonly width?: number;
  readonly height?: number;
}

const spelled: Readonly<Record<string, string>> = {
  SlabDepth: 'Slab depth (km)',
  ThermalParameter: 'Thermal parameter Φ (km)',
  TrenchDistance: 'Distance from the trench (km)',
  ArcPosition: 'Position along the arc (km)',
  SlabDip: 'Slab dip (°)',
  DescentRate: 'Descent rate (km/Ma)',
};

/** Title of an axis or a legend of a quantity: the slab's columns spelled out, all others as chemistry is. */
export function marginTitle(symbol: string, unit: string): string {
  return spelled[symbol] ?? axisTitle(symbol, unit);
}

/**
 * A trend across or along an arc: one point a volcano with its 1σ, the robust line, and its interval. The line is dashed where no trend is shown.
 *
 * @param trend from `crossArcTrend`
 * @param options `names`, `title`, `width`, `height`
 * @throws TypeError for anything that is not a trend
 * @example diagrams.arcTrendPlot(crossArcTrend(placed, { of: 'Ba/Th', against: 'SlabDepth' }))
 */
export function arcTrendPlot(trend: ArcTrend, options: ArcTrendPlotOptions = {}): Diagram {
  if (typeof trend !== 'object' || trend === null || !Array.isArray(trend.points) || trend.band === undefined)
    throw new TypeError('arcTrendPlot: the first argument must be what crossArcTrend returned.');
  const { width = 440, height = 330, names = 'all' } = options;
  for (const [name, size] of Object.entries({ width, height }))
    if (!(size >= 120 && size <= 4000)) throw new RangeError(`arcTrendPlot: ${name} must be 120 to 4000 pixels, not ${String(size)}.`);
  const { points, band, line, at, of, unit } = trend;
  const column = (pick: (point: ArcTrend['points'][number]) => number) => Float64Array.from(points, pick);
  const y = column((point) => point.y);
  const sigma = column((point) => point.ySigma);
  const yTitle =
    at === undefined
      ? axisTitle(of, unit)
      : `${expressionText(of)} at ${at.value} % ${symbolText(at.index)}${unit === '' ? '' : ` (${unit === 'wt%' ? 'wt %' : unit})`}`;
  const xTitle = marginTitle(trend.against, trend.againstUnit);
  const set: SamplePoints = {
    x: column((point) => point.x),
    y,
    sigmaY: sigma,
    axisTitles: [xTitle, yTitle],
    tooltips: new Map<string, ArrayLike<string | number>>([
      [trend.by, points.map(({ group }) => group)],
      ['samples', points.map(({ used }) => used)],
    ]),
  };
  const frame: Frame = {
    width,
    height,
    x: { title: xTitle, window: windowAround([set.x], { leastSpan: 1e-6 }) },
    y: {
      title: yTitle,
      window: windowAround([y.map((value, i) => value - (sigma[i] || 0)), y.map((value, i) => value + (sigma[i] || 0)), band.low, band.high], {
        leastSpan: 1e-6,
      }),
    },
  };
  const ends = [band.x[0], band.x[band.x.length - 1]].map((x) => [x, line.intercept + line.slope * x] as const);
  return figure({
    name: `${yTitle} against ${xTitle}`,
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          bandsLayer([{ ...band, colour: groupColours[0], opacity: 0.14 }]),
          linesLayer([{ points: ends, colour: ink.path, width: 1.6, ...(trend.verdict === 'trend' ? {} : { dash: [5, 4] }) }]),
          samplesLayer(set, { errors: 'bars' }),
          namesLayer(
            set,
            points.map(({ group }) => group),
            names,
          ),
        ],
      },
    ],
    caption: [
      dressText(trend.sentence),
      'Bars: 1σ of the volcano’s value. Band: interval of the line, by bootstrap of residuals and samples.',
      ...(trend.verdict === 'trend' ? [] : ['Dashed line: no trend is shown.']),
    ],
    counts: { plotted: points.length, notPlotted: 0, reasons: {} },
    counted: 'volcanic centre',
    lineage: [...trend.lineage, step('diagrams.arcTrendPlot', { of, against: trend.against })],
  });
}
