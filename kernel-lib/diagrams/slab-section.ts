import { eventKindNames, geodesic, pointAt, slabBelow, slabSupport, type HypocentreSlab, type Hypocentres, type SlabSurface } from '../margin';
import { joinLineages, step, type Suite } from '../suite';
import { volcanoMarks } from './arc-map';
import type { Diagram } from './diagram';
import { figure, legendRoom } from './figure';
import { roundStep, type Frame } from './frame';
import type { Point } from './geometry';
import { groupScale } from './groups';
import { bandsLayer, linesLayer } from './layers/lines';
import { samplesLayer, type SamplePoints } from './layers/samples';
import { volcanoesLayer, type VolcanoMark } from './layers/volcanoes';
import { textWidth } from './font';
import { lineUnit, specNumber, unit, type Layer } from './layer';
import { fontStack, ink, textSize } from './theme';

/** What a section across an arc takes. */
export interface SlabSectionOptions {
  /** A volcano, or `[longitude, latitude]`, that the section runs through (default: the middle of the volcanoes). */
  readonly through?: string | readonly [number, number];
  /** Azimuth of the section in degrees, down dip (default: the slab's own there). */
  readonly azimuth?: number;
  /** Width of the strip whose volcanoes and earthquakes are drawn, km (default 150). */
  readonly swath?: number;
  /** Earthquakes (default: those that the surface was fitted to). */
  readonly hypocentres?: Pick<Hypocentres, 'longitude' | 'latitude' | 'depth'>;
  /** Label that names the volcanoes (default `volcano`). */
  readonly by?: string;
  readonly names?: readonly string[] | 'all';
  readonly title?: string;
  readonly width?: number;
}

/** Plane position on the section: km along it from the trench, and km to its side. */
type OnSection = (longitude: number, latitude: number) => Point;

/**
 * A section straight down dip: the slab with its 1σ, the earthquakes of a strip, and the volcanoes above, without vertical exaggeration.
 *
 * @param slab from `slabFromHypocentres` (its events are drawn by kind) or `slabFromDepths`
 * @param suite n samples with the columns `latitude` and `longitude` (°) and a label that names the volcano
 * @param options see SlabSectionOptions
 * @throws RangeError for a place without a slab below, an unknown volcano, or a bad option
 * @example diagrams.slabSection(slab, placed, { through: 'Ketu' })
 */
export function slabSection(slab: SlabSurface, suite: Suite, options: SlabSectionOptions = {}): Diagram {
  const { by = 'volcano', swath = 150, width = 560, names = 'all' } = options;
  if (typeof slab?.at !== 'function')
    throw new TypeError('slabSection: the first argument must be a slab surface, from slabFromDepths or slabFromHypocentres.');
  if (typeof suite !== 'object' || suite === null || !suite.has?.('latitude') || !suite.has('longitude')) {
    throw new RangeError('slabSection: the second argument must be a suite with the columns latitude and longitude (°); see withCoordinates.');
  }
  if (!(swath > 0)) throw new RangeError(`slabSection: swath must be a positive number of km, not ${String(swath)}.`);
  if (!(width >= 200 && width <= 2000)) throw new RangeError(`slabSection: width must be 200 to 2000 pixels, not ${String(width)}.`);
  const centre = (slab.extent.west + slab.extent.east) / 2;
  const marks = volcanoMarks(suite, by, centre, undefined);
  const [longitude, latitude] = sectionPoint(marks, options.through);
  const here = slabBelow(slab, { longitude: [longitude], latitude: [latitude] });
  const azimuth = options.azimuth ?? here.strike[0] + 90;
  if (!Number.isFinite(azimuth))
    throw new RangeError(
      `slabSection: there is no slab below ${longitude.toFixed(2)}° E, ${latitude.toFixed(2)}° N. Choose another place with { through } ` +
      'and give an azimuth.',
    );
  const fromTrench = here.trenchDistance[0];
  const start = Number.isFinite(fromTrench) ? fromTrench : 0;
  const onSection: OnSection = (lon, lat) => {
    const way = geodesic(longitude, latitude, lon, lat);
    const turn = ((way.azimuth - azimuth) * Math.PI) / 180;
    return [start + way.distance * Math.cos(turn), way.distance * Math.sin(turn)];
  };

  const events = eventPoints(slab, options.hypocentres, onSection, swath / 2);
  const above = marks.flatMap((mark): VolcanoMark[] => {
    const [x, aside] = onSection(mark.x, mark.y);
    return Math.abs(aside) <= swath / 2 ? [{ ...mark, x, y: 0 }] : [];
  });
  const profile = slabProfile(slab, { longitude, latitude, azimuth, start });
  if (profile.x.length === 0) throw new RangeError('slabSection: the section meets no slab. Choose another place with { through }.');
  const across = sectionWindow(width, profile, above, Number.isFinite(fromTrench));
  const shown = above.filter(({ x }) => x >= across[0] && x <= across[1]);
  const perPixel = (across[1] - across[0]) / width;
  const asked = names === 'all' ? shown : shown.filter(({ name }) => names.includes(name));
  const rows = rowsOfNames(asked, across, width);
  const frame = sectionFrame(width, across, profile, Number.isFinite(fromTrench), 16 + rowHeight * (1 + Math.max(-1, ...rows.map(({ row }) => row))));
  return figure({
    name: 'Section across the arc',
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          ...(events === undefined ? [] : [samplesLayer(events.points, { inPanel: true })]),
          bandsLayer(profile.bands.map((band) => ({ ...band, colour: ink.text, opacity: 0.16 }))),
          linesLayer(profile.lines.map(({ points, dashed }) => ({ points, colour: ink.text, width: 1.8, ...(dashed ? { dash: [5, 4] } : {}) }))),
          linesLayer([
            {
              points: [
                [frame.x.window[0], 0],
                [frame.x.window[1], 0],
              ],
              colour: ink.axis,
              width: 1,
            },
          ]),
          volcanoesLayer(shown, { names: [], above: true }),
          namesAboveLayer(rows, perPixel),
        ],
      },
    ],
    caption: [
      `Section towards ${Math.round(((azimuth % 360) + 360) % 360)}°, straight down dip, through ` +
      `${typeof options.through === 'string' ? options.through : placeText(longitude, latitude)}; ` +
      `a strip of ${swath} km; no vertical exaggeration.`,
      `Line: slab (${slab.kind}) and its 1σ${profile.lines.some(({ dashed }) => dashed) ? ', dashed where extrapolated' : ''}.`,
      ...(Number.isFinite(fromTrench) ? [`Distances from the ${slab.trench?.name ?? 'trench'}.`] : []),
      ...(events === undefined ? [] : [`${events.points.x.length} earthquakes.`]),
    ],
    counts: { plotted: shown.length, notPlotted: marks.length - shown.length, reasons: { 'outside the strip': marks.length - shown.length } },
    counted: 'volcanic centre',
    legendWidth: events?.points.groups === undefined ? 0 : legendRoom(events.points.groups.title, events.points.groups.names),
    lineage: [...joinLineages(suite.lineage, slab.lineage), step('diagrams.slabSection', { longitude, latitude, azimuth, swath })],
  });
}

function placeText(longitude: number, latitude: number): string {
  return `${Math.abs(longitude).toFixed(2)}° ${longitude < 0 ? 'W' : 'E'}, ${Math.abs(latitude).toFixed(2)}° ${latitude < 0 ? 'S' : 'N'}`;
}

function sectionPoint(marks: readonly VolcanoMark[], through: SlabSectionOptions['through']): readonly [number, number] {
  if (typeof through === 'string') {
    const found = marks.find(({ name }) => name === through);
    if (found === undefined || !Number.isFinite(found.x))
      throw new RangeError(`slabSection: there is no volcano "${through}" with a position. There are: ${marks.map(({ name }) => name).join(', ')}.`);
    return [found.x, found.y];
  }
  if (through !== undefined) {
    if (!(Array.isArray(through) && through.length === 2 && through.every(Number.isFinite)))
      throw new RangeError('slabSection: through must be the name of a volcano or [longitude, latitude].');
    return through as readonly [number, number];
  }
  const placed = marks.filter(({ x, y }) => Number.isFinite(x) && Number.isFinite(y));
  if (placed.length === 0) throw new RangeError('slabSection: no volcano has a position; give { through: [longitude, latitude] }.');
  return [placed.reduce((sum, { x }) => sum + x, 0) / placed.length, placed.reduce((sum, { y }) => sum + y, 0) / placed.length];
}

/** The slab along the section, every 4 km, until it ends. */
function slabProfile(
  slab: SlabSurface,
  at: { readonly longitude: number; readonly latitude: number; readonly azimuth: number; readonly start: number },
) {
  const step = 4;
  const reach = Math.ceil(700 / step);
  const places = Array.from({ length: 2 * reach + 1 }, (_, k) => (k - reach) * step).map((d) => ({
    x: at.start + d,
    ...(d >= 0 ? pointAt(at.longitude, at.latitude, at.azimuth, d) : pointAt(at.longitude, at.latitude, at.azimuth + 180, -d)),
  }));
  const below = slab.at(
    places.map(({ longitude }) => longitude),
    places.map(({ latitude }) => latitude),
  );
  const x: number[] = [];
  const depth: number[] = [];
  const lines: { points: Point[]; dashed: boolean }[] = [];
  const bands: { x: number[]; low: number[]; high: number[] }[] = [];
  let open: { line: { points: Point[]; dashed: boolean }; band: { x: number[]; low: number[]; high: number[] } } | undefined;
  const middle = reach;
  // Only the stretch that holds the place itself: beyond a gap the section may meet another part of the slab.
  let [from, to] = [middle, middle];
  while (from > 0 && below.support[from - 1] !== slabSupport.none) from--;
  while (to < places.length - 1 && below.support[to + 1] !== slabSupport.none) to++;
  for (let k = from; k <= to; k++) {
    if (below.support[k] === slabSupport.none || (places[k].x < -20 && Number.isFinite(at.start))) {
      open = undefined;
      continue;
    }
    const dashed = below.support[k] === slabSupport.extrapolated;
    if (open === undefined || open.line.dashed !== dashed) {
      const last = open?.line.points.at(-1);
      open = { line: { points: last === undefined ? [] : [last], dashed }, band: open?.band ?? { x: [], low: [], high: [] } };
      lines.push(open.line);
      if (!bands.includes(open.band)) bands.push(open.band);
    }
    open.line.points.push([places[k].x, below.depth[k]]);
    open.band.x.push(places[k].x);
    open.band.low.push(below.depth[k] - below.sigma[k]);
    open.band.high.push(below.depth[k] + below.sigma[k]);
    x.push(places[k].x);
    depth.push(below.depth[k]);
  }
  return { x, depth, lines, bands };
}

function sectionWindow(
  width: number,
  profile: { readonly x: readonly number[] },
  above: readonly VolcanoMark[],
  fromTrench: boolean,
): readonly [number, number] {
  const volcanoes = above.map(({ x }) => x);
  // To some way behind the last volcano, so that a long slab does not shrink the arc.
  const right = Math.min(Math.max(...profile.x), Math.max(...volcanoes, 150) + 120);
  const left = Math.min(fromTrench ? 0 : Math.min(...profile.x), ...volcanoes);
  const gap = roundStep(right - left, Math.max(3, Math.floor(width / 90)));
  return [Math.floor(left / gap) * gap, Math.ceil(right / (gap / 2)) * (gap / 2)];
}

function sectionFrame(
  width: number,
  x: readonly [number, number],
  profile: { readonly x: readonly number[]; readonly depth: readonly number[] },
  fromTrench: boolean,
  roomAbove: number,
): Frame {
  const deepest = Math.max(...profile.depth.filter((_, i) => profile.x[i] <= x[1]));
  const bottom = Math.ceil((deepest * 1.08 + 10) / 25) * 25;
  const perPixel = (x[1] - x[0]) / width;
  const top = -roomAbove * perPixel;
  const step = roundStep(bottom, Math.max(2, Math.floor(bottom / perPixel / 60)));
  const ticks = Array.from({ length: Math.floor(bottom / step) + 1 }, (_, k) => k * step);
  return {
    width,
    height: Math.round((bottom - top) / perPixel),
    x: { title: fromTrench ? 'Distance from the trench (km)' : 'Distance along the section (km)', window: x },
    y: { title: 'Depth (km)', window: [top, bottom], reversed: true, ticks },
  };
}

/** Names stand straight above their volcanoes, in as many rows as keep them apart. */
interface NameAbove {
  readonly name: string;
  readonly x: number;
  /** 0 is the lowest row. */
  readonly row: number;
}

const rowHeight = 15;

function rowsOfNames(marks: readonly VolcanoMark[], [low, high]: readonly [number, number], width: number): NameAbove[] {
  const ends: number[] = [];
  return [...marks]
    .sort((a, b) => a.x - b.x)
    .map(({ name, x }) => {
      const middle = ((x - low) / (high - low)) * width;
      const half = textWidth(name, { size: textSize.note }) / 2;
      // A name also keeps off the leaders of higher rows, which stand at the middles of later names.
      let row = ends.findIndex((end) => middle - half > end + 5);
      if (row === -1) row = ends.length;
      for (let lower = 0; lower < row; lower++) ends[lower] = Math.max(ends[lower], middle);
      ends[row] = middle + half;
      return { name, x, row };
    });
}

function namesAboveLayer(rows: readonly NameAbove[], perPixel: number): Layer {
  const heightOf = (row: number) => -(16 + rowHeight * row) * perPixel;
  return {
    draw({ frame }) {
      if (rows.length === 0) return [];
      const leaders = rows
        .filter(({ row }) => row > 0)
        .map(({ x, row }): Point[] => [
          [x, -9 * perPixel],
          [x, heightOf(row) + 2 * perPixel],
        ]);
      const texts = rows.map(({ name, x, row }) => ({ x: specNumber(x), y: specNumber(heightOf(row)), t: name }));
      return [
        ...(leaders.length === 0 ? [] : [lineUnit(frame, leaders, { color: ink.line, strokeWidth: 0.8 })]),
        unit(
          frame,
          {
            type: 'text',
            align: 'center',
            baseline: 'bottom',
            font: fontStack,
            fontSize: textSize.note,
            color: ink.text,
            clip: false,
            tooltip: null,
          },
          texts,
          { text: { field: 't', type: 'nominal' } },
        ),
      ];
    },
  };
}

function eventPoints(
  slab: SlabSurface,
  given: SlabSectionOptions['hypocentres'],
  onSection: OnSection,
  half: number,
): { points: SamplePoints } | undefined {
  const own = slab.kind === 'hypocentres' ? (slab as HypocentreSlab).events : undefined;
  const events = given ?? own;
  if (events === undefined) return undefined;
  const kinds = given === undefined ? own?.kind : undefined;
  const rows: { x: number; y: number; kind: number }[] = [];
  for (let i = 0; i < events.depth.length; i++) {
    const [x, aside] = onSection(events.longitude[i], events.latitude[i]);
    if (Math.abs(aside) <= half && Number.isFinite(events.depth[i])) rows.push({ x, y: events.depth[i], kind: kinds?.[i] ?? 0 });
  }
  const points = {
    x: Float64Array.from(rows, ({ x }) => x),
    y: Float64Array.from(rows, ({ y }) => y),
    tooltips: new Map<string, ArrayLike<string>>(),
    axisTitles: ['distance (km)', 'depth (km)'] as const,
  };
  if (kinds === undefined) return { points };
  const present = eventKindNames.filter((_, kind) => rows.some((row) => row.kind === kind));
  const groups = groupScale('earthquakes', present);
  return { points: { ...points, groups, group: Uint16Array.from(rows, ({ kind }) => present.indexOf(eventKindNames[kind])) } };
}
