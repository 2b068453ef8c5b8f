import { evaluate, step, type Suite } from '../suite';
import { axisTitle } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { windowAround, type Axis, type Frame, type WindowHints } from './frame';
import { linesLayer, type LineShape } from './layers/lines';
import { markersLayer, pathsLayer, type MarkerShape } from './layers/markers';
import { namesLayer } from './layers/names';
import { samplesLayer } from './layers/samples';
import { pathShapes, type PathInput } from './model-paths';
import { samplePoints, type SampleOptions } from './sample-points';

/** What the diagram of any two quantities takes, besides what all diagrams take. */
export interface XyOptions extends SampleOptions {
  /** `log` axes, each alone or both (default `linear`). */
  readonly scale?: 'linear' | 'log' | { readonly x?: 'linear' | 'log'; readonly y?: 'linear' | 'log' };
  /** Expressions that may be used by name. */
  readonly named?: Readonly<Record<string, string>>;
  /** Reference value of normalised analytes, in their canonical unit. */
  readonly reference?: (symbol: string) => number;
  /** Words on the axes instead of the expressions. */
  readonly axisTitles?: { readonly x?: string; readonly y?: string };
  /** Paths of models, or of points in the units of the axes. */
  readonly paths?: readonly PathInput[];
  readonly reservoirs?: readonly MarkerShape[];
  readonly lines?: readonly LineShape[];
  /** Sentences for the caption. */
  readonly caption?: readonly string[];
}

/**
 * Any quantity against any other: `xy(suite, 'Ba/Th', '(La/Sm)N', { scale: 'log' })`.
 *
 * @param suite n samples
 * @param x expression over analytes for the horizontal axis; units are those of the suite (wt %, ppm), none for ratios
 * @param y expression for the vertical axis
 * @throws ExpressionError for an expression the suite cannot give; RangeError for a bad option
 * @example diagrams.xy(suite, 'SiO2', 'Ba/Th', { group: 'volcano' })
 */
export function xy(suite: Suite, x: string, y: string, options: XyOptions = {}): Diagram {
  const { scale = 'linear', named, reference, axisTitles = {}, reservoirs = [], lines = [] } = options;
  const scales = typeof scale === 'string' ? { x: scale, y: scale } : { x: scale.x ?? 'linear', y: scale.y ?? 'linear' };
  for (const [axis, kind] of Object.entries(scales)) {
    if (kind !== 'linear' && kind !== 'log') throw new RangeError(`xy: the scale of ${axis} must be "linear" or "log", not "${String(kind)}".`);
  }
  const set = samplePoints(
    'xy',
    suite,
    { x, y, named, reference, axisTitles: [axisTitles.x ?? axisTitle(x), axisTitles.y ?? axisTitle(y)] },
    options,
  );
  const { shapes: paths, notes } = pathShapes('xy', options.paths, (liquid) => ({
    x: evaluate(liquid, x, { named, reference, sigma: false }).values,
    y: evaluate(liquid, y, { named, reference, sigma: false }).values,
  }));
  const units = [x, y].map((text) => evaluate(suite, text, { named, reference, sigma: false }).unit);
  const extra = (at: 0 | 1) => [...paths, ...lines].map(({ points }) => points.map((point) => point[at]));
  const axis = (side: 'x' | 'y', values: Float64Array): Axis => {
    const at = side === 'x' ? 0 : 1;
    const hints: WindowHints = { scale: scales[side], within: [-Infinity, Infinity] };
    const chosen = typeof options.window === 'object' ? options.window[side] : undefined;
    const also =
      options.window === 'whole' ? [reservoirs.map((each) => each[side]), ...extra(at)] : paths.map(({ points }) => points.map((point) => point[at]));
    return {
      title: axisTitles[side] ?? axisTitle(side === 'x' ? x : y, units[at]),
      scale: scales[side],
      window: chosen ?? windowAround([values, ...also], hints),
    };
  };
  const frame: Frame = { width: options.width ?? 440, height: options.height ?? 360, x: axis('x', set.points.x), y: axis('y', set.points.y) };
  return figure({
    name: `${frame.y.title} against ${frame.x.title}`,
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          linesLayer(lines),
          samplesLayer(set.points, options),
          ...(options.names === undefined ? [] : [namesLayer(set.points, suite.samples, options.names)]),
          pathsLayer(paths),
          markersLayer(reservoirs),
        ],
      },
    ],
    caption: [...(options.caption ?? []), ...notes, ...set.notes],
    counts: set.counts(frame),
    legendWidth: set.legendWidth,
    lineage: [...suite.lineage, step('diagrams.xy', { x, y, scale: scales })],
  });
}
