import { longitudeNear, slabContours, type Hypocentres, type SlabSurface, type TrenchLine } from '../margin';
import { evaluate, joinLineages, step, type Suite } from '../suite';
import { reservoir } from '../tables';
import { marginTitle } from './arc-trend-plot';
import type { Diagram } from './diagram';
import { figure, legendRoom } from './figure';
import { checkWindow, roundStep, windowAround, type Axis, type Frame, type WindowChoice } from './frame';
import { specNumber, unit, type Layer } from './layer';
import { contoursLayer, type ContourShape } from './layers/contours';
import { compassLayer, trenchLayer } from './layers/map-furniture';
import { volcanoesLayer, type VolcanoMark } from './layers/volcanoes';
import { ink } from './theme';

/** What the map of an arc takes. */
export interface ArcMapOptions {
  /** Quantity or expression that colours the volcanoes by their median: `SlabDepth`, `Ba/Th`, `(La/Sm)N` (default: one colour). */
  readonly colour?: string;
  /** Label that names the volcanoes (default `volcano`). */
  readonly by?: string;
  /** Depths of the slab contours, km (default: every 50 km, or 20 where the slab is shallow). */
  readonly contours?: readonly number[];
  /** Trench line in place of the slab's own. */
  readonly trench?: TrenchLine;
  /** Earthquakes, drawn as small grey dots. */
  readonly hypocentres?: Pick<Hypocentres, 'longitude' | 'latitude'>;
  readonly names?: readonly string[] | 'all';
  /** Longitudes (x) and latitudes (y) shown; the data and a margin by default. */
  readonly window?: Exclude<WindowChoice, 'whole'>;
  readonly title?: string;
  readonly width?: number;
  /** Reservoir that normalised values are divided by (default `chondrite-c1-1989`). */
  readonly reference?: string;
}

/**
 * A map of an arc: volcanoes coloured by any value, depth contours of the slab, the trench with teeth on the upper plate, scale bar and north
 * arrow. Longitude and latitude are drawn to one scale at the middle of the map, without tiles or coastlines from outside.
 *
 * @param slab from `slabFromDepths` or `slabFromHypocentres`
 * @param suite n samples with the columns `latitude` and `longitude` (°) and a label that names the volcano
 * @param options see ArcMapOptions
 * @throws RangeError for a suite without coordinates, an unknown label or a bad option; ExpressionError for a colour the suite cannot give
 * @example diagrams.arcMap(slab, placed, { colour: 'SlabDepth' })
 */
export function arcMap(slab: SlabSurface, suite: Suite, options: ArcMapOptions = {}): Diagram {
  const { by = 'volcano', colour, width = 460, names = 'all', reference = 'chondrite-c1-1989' } = options;
  if (typeof slab?.at !== 'function')
    throw new TypeError('arcMap: the first argument must be a slab surface, from slabFromDepths or slabFromHypocentres.');
  if (typeof suite !== 'object' || suite === null || !suite.has?.('latitude') || !suite.has('longitude')) {
    throw new RangeError('arcMap: the second argument must be a suite with the columns latitude and longitude (°); see withCoordinates.');
  }
  checkWindow('arcMap', options.window);
  if (!(width >= 160 && width <= 2000)) throw new RangeError(`arcMap: width must be 160 to 2000 pixels, not ${String(width)}.`);
  const composition = reservoir(reference);
  const value = colour === undefined ? undefined : evaluate(suite, colour, { reference: (symbol) => composition.values.get(symbol)?.value ?? NaN });
  const centre = (slab.extent.west + slab.extent.east) / 2;
  const marks = volcanoMarks(suite, by, centre, value?.values);
  const placed = marks.filter(({ x, y }) => Number.isFinite(x) && Number.isFinite(y));
  const trench = options.trench ?? slab.trench;

  const chosen = typeof options.window === 'object' ? options.window : {};
  const { x, y } = mapWindow(placed, trench, slab, centre, chosen);
  const narrowing = Math.cos((((y[0] + y[1]) / 2) * Math.PI) / 180);
  const height = Math.min(1200, Math.max(140, Math.round((width * (y[1] - y[0])) / ((x[1] - x[0]) * narrowing))));
  const frame: Frame = { width, height, x: degreeAxis('Longitude', x, width, 'E', 'W'), y: degreeAxis('Latitude', y, height, 'N', 'S') };

  const region = { west: x[0], east: x[1], south: y[0], north: y[1] };
  const depths = options.contours ?? usualDepths(slab.depthRange);
  const lines = slabContours(slab, depths, { frame: region }).map(({ depth, pieces }): ContourShape => ({
    label: String(depth),
    pieces: pieces.map((piece) => ({ points: piece.longitude.map((east, k) => [east, piece.latitude[k]] as const), dashed: piece.extrapolated })),
  }));
  const dots = options.hypocentres === undefined ? [] : [dotsLayer(options.hypocentres, centre)];
  const dashed = lines.some(({ pieces }) => pieces.some((piece) => piece.dashed));
  return figure({
    name: 'Map of an arc and its slab',
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          ...dots,
          contoursLayer(
            lines,
            placed.map((mark) => [mark.x, mark.y] as const),
          ),
          ...(trench === undefined ? [] : [trenchLayer(trench.longitude, trench.latitude, centre)]),
          compassLayer(frame),
          volcanoesLayer(placed, { names, ...(value === undefined ? {} : { valueTitle: marginTitle(colour!, value.unit) }) }),
        ],
      },
    ],
    caption: [
      'Lines: depth of the slab in km ' +
      `(${slab.kind}${slab.name === '' || slab.name === slab.kind ? '' : ` ${slab.name}`})${dashed ? ', dashed where extrapolated' : ''}.`,
      ...(trench === undefined ? [] : [`Toothed line: ${trench.name}.`]),
      ...(value === undefined ? [] : ['Colour: median of each volcano.']),
      ...(options.hypocentres === undefined ? [] : ['Grey: earthquakes.']),
      'Longitude and latitude to one scale at the middle of the map; scale bar for that latitude.',
    ],
    counts: { plotted: placed.length, notPlotted: marks.length - placed.length, reasons: { 'without a position': marks.length - placed.length } },
    counted: 'volcanic centre',
    legendWidth: value === undefined ? 0 : legendRoom(marginTitle(colour!, value.unit), []),
    lineage: [...joinLineages(suite.lineage, slab.lineage), step('diagrams.arcMap', { by, colour: colour ?? null, contours: [...depths] })],
  });
}

/** One mark a volcano: the middle of its samples, and the median of the value that colours it. */
export function volcanoMarks(suite: Suite, by: string, centre: number, values: Float64Array | undefined): VolcanoMark[] {
  const longitude = suite.values('longitude');
  const latitude = suite.values('latitude');
  const rows = new Map<string, number[]>();
  suite.label(by).forEach((name, i) => {
    if (name !== '') rows.set(name, [...(rows.get(name) ?? []), i]);
  });
  const middle = (list: readonly number[]) => {
    const sorted = list.filter(Number.isFinite).sort((a, b) => a - b);
    return sorted.length === 0 ? NaN : (sorted[(sorted.length - 1) >> 1] + sorted[sorted.length >> 1]) / 2;
  };
  return [...rows].map(([name, of]) => ({
    name,
    samples: of.length,
    x: middle(of.map((i) => longitudeNear(longitude[i], centre))),
    y: middle(of.map((i) => latitude[i])),
    ...(values === undefined ? {} : { value: middle(of.map((i) => values[i])) }),
  }));
}

function mapWindow(
  marks: readonly VolcanoMark[],
  trench: TrenchLine | undefined,
  slab: SlabSurface,
  centre: number,
  chosen: { readonly x?: readonly [number, number]; readonly y?: readonly [number, number] },
): { x: readonly [number, number]; y: readonly [number, number] } {
  const lats = marks.map(({ y }) => y);
  const nearby = { x: [] as number[], y: [] as number[] };
  if (marks.length === 0) {
    nearby.x.push(slab.extent.west, slab.extent.east);
    nearby.y.push(slab.extent.south, slab.extent.north);
  }
  // The trench beside the volcanoes, and no more of it, so that a long slab does not shrink them to a dot.
  const reach = Math.max(0.6, (Math.max(...lats) - Math.min(...lats)) * 0.25);
  trench?.latitude.forEach((latitude, i) => {
    if (marks.length > 0 && (latitude < Math.min(...lats) - reach || latitude > Math.max(...lats) + reach)) return;
    const x = longitudeNear(trench.longitude[i], centre);
    const narrow = Math.cos((latitude * Math.PI) / 180);
    if (marks.length > 0 && !marks.some((mark) => Math.hypot((mark.x - x) * narrow, mark.y - latitude) < 4)) return;
    nearby.x.push(x);
    nearby.y.push(latitude);
  });
  const x = chosen.x ?? windowAround([marks.map((mark) => mark.x), nearby.x], { leastSpan: 0.5 });
  let y = chosen.y ?? windowAround([lats, nearby.y], { leastSpan: 0.5, within: [-90, 90] });
  if (chosen.y === undefined) {
    // A very flat map is widened northward and southward, a half of its width at least.
    const narrow = Math.cos((((y[0] + y[1]) / 2) * Math.PI) / 180);
    const lack = 0.5 * (x[1] - x[0]) * narrow - (y[1] - y[0]);
    if (lack > 0) y = [Math.max(-90, y[0] - lack / 2), Math.min(90, y[1] + lack / 2)];
  }
  return { x, y };
}

/** An axis in degrees with the quarter of the globe beside each number: 130° W, 44.5° S. */
function degreeAxis(title: string, window: readonly [number, number], length: number, positive: string, negative: string): Axis {
  const gap = roundStep(window[1] - window[0], Math.max(2, Math.floor(length / 80)));
  const ticks: number[] = [];
  for (let k = Math.ceil(window[0] / gap - 1e-9); k * gap <= window[1] + 1e-9; k++) ticks.push(Number((k * gap).toPrecision(10)));
  const text = (tick: number) => {
    const turned = positive === 'E' ? longitudeNear(tick, 0) : tick;
    const size = Number(Math.abs(turned).toFixed(6));
    return `${size}°${size === 0 || size === 180 ? '' : ` ${turned > 0 ? positive : negative}`}`;
  };
  return { title, window, ticks, tickNames: ticks.map(text) };
}

function usualDepths([shallow, deep]: readonly [number, number]): number[] {
  const gap = deep - shallow <= 120 ? 20 : 50;
  const depths: number[] = [];
  for (let depth = gap; depth <= deep; depth += gap) if (depth >= shallow) depths.push(depth);
  return depths;
}

function dotsLayer({ longitude, latitude }: Pick<Hypocentres, 'longitude' | 'latitude'>, centre: number): Layer {
  const most = 4000;
  const every = Math.max(1, Math.ceil(longitude.length / most));
  return {
    draw({ frame }) {
      const rows: object[] = [];
      for (let i = 0; i < longitude.length; i += every) rows.push({ x: specNumber(longitudeNear(longitude[i], centre)), y: specNumber(latitude[i]) });
      return [unit(frame, { type: 'point', filled: true, size: 4, color: ink.faintLine, opacity: 0.8, tooltip: null }, rows)];
    },
  };
}
