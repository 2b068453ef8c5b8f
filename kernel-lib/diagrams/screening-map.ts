import type { FertilityScreen } from '../fertility';
import { column, step, suiteOf } from '../suite';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { windowAround, type Frame } from './frame';
import { specNumber, unit, type Layer } from './layer';
import { namesLayer } from './layers/names';
import { samplesLayer } from './layers/samples';
import { samplePoints, type SampleOptions } from './sample-points';
import { verdictGroups } from './screening';
import { ink } from './theme';

/** What the map of a screening takes. */
export type ScreeningMapOptions = Pick<SampleOptions, 'window' | 'names' | 'title' | 'width'>;

/** More samples than this are left off the map: their groups stand for them. */
const mostDots = 5000;

/**
 * A map of the groups of a screening, coloured by verdict, with the samples as grey dots: plain longitude and latitude, a degree of each
 * as long as it is in the middle of the map.
 *
 * @param screen what `screenFertility` returned, of a suite with `latitude` and `longitude` (°)
 * @param options `names`: groups to name (default `all`), `window`, `title`, `width` (pixels)
 * @throws RangeError for a screening without coordinates, or a bad option
 * @example diagrams.screeningMap(screen)
 */
export function screeningMap(screen: FertilityScreen, options: ScreeningMapOptions = {}): Diagram {
  if (typeof screen !== 'object' || screen === null || !Array.isArray(screen.groups))
    throw new TypeError('screeningMap: the first argument must be what screenFertility returned.');
  if (!screen.suite.has('latitude') || !screen.suite.has('longitude')) {
    throw new RangeError('screeningMap: the screened suite has no columns latitude and longitude (°); without them nothing can be put on a map.');
  }
  const { groups } = screen;
  // Longitudes are counted on past 180° where the groups lie on both sides of it.
  const spread = (of: readonly number[]) => Math.max(...of) - Math.min(...of);
  const plain = groups.map(({ longitude }) => longitude).filter(Number.isFinite);
  const turned = plain.map((east) => (east < 0 ? east + 360 : east));
  const turn = plain.length > 0 && spread(turned) < spread(plain) ? (east: number) => (east < 0 ? east + 360 : east) : (east: number) => east;
  const middles = suiteOf({
    columns: [
      column({ symbol: 'longitude', values: groups.map(({ longitude }) => turn(longitude)), unit: '°' }),
      column({ symbol: 'latitude', values: groups.map(({ latitude }) => latitude), unit: '°' }),
    ],
    labels: {
      sample: groups.map(({ group }) => group),
      verdict: groups.map(({ verdict }) => verdict),
      rank: groups.map(({ rank }) => String(rank)),
      score: groups.map(({ score }) => (Number.isNaN(score) ? '' : score.toFixed(2))),
    },
  });
  const sampleOptions: SampleOptions = { group: 'verdict', ...options };
  const set = samplePoints(
    'screeningMap',
    middles,
    {
      x: 'longitude',
      y: 'latitude',
      axisTitles: ['longitude', 'latitude'],
      tooltips: new Map([
        ['rank', middles.label('rank')],
        ['score', middles.label('score')],
      ]),
    },
    sampleOptions,
  );
  const dots = sampleDots(screen, turn);
  const chosen = typeof options.window === 'object' ? options.window : {};
  const x = chosen.x ?? windowAround([set.points.x, dots.x], { leastSpan: 0.2 });
  const y = chosen.y ?? windowAround([set.points.y, dots.y], { leastSpan: 0.2, within: [-90, 90] });
  const narrowing = Math.cos((((y[0] + y[1]) / 2) * Math.PI) / 180);
  const width = options.width ?? 460;
  const height = Math.min(900, Math.max(160, Math.round((width * (y[1] - y[0])) / ((x[1] - x[0]) * narrowing))));
  const frame: Frame = { width, height, x: { title: 'Longitude (°)', window: x }, y: { title: 'Latitude (°)', window: y } };
  return figure({
    name: 'Map of a copper-gold screening',
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          dotsLayer(dots),
          samplesLayer({ ...set.points, ...verdictGroups(middles.label('verdict')) }, {}),
          namesLayer(set.points, middles.samples, options.names ?? 'all'),
        ],
      },
    ],
    caption: [
      `Colour: verdict on the ${screen.label}, at the middle of its samples.${dots.x.length > 0 ? ' Grey: samples.' : ''}`,
      'Whole-rock chemistry screens suites; it does not find ore. Drilling and disclosure need a qualified (competent) person.',
    ],
    counts: set.counts(frame),
    counted: screen.label,
    legendWidth: set.legendWidth,
    lineage: [...screen.lineage, step('diagrams.screeningMap', { groups: groups.length })],
  });
}

interface Dots {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

function sampleDots({ suite }: FertilityScreen, turn: (east: number) => number): Dots {
  if (suite.size > mostDots) return { x: new Float64Array(0), y: new Float64Array(0) };
  return { x: suite.values('longitude').map(turn), y: suite.values('latitude') };
}

function dotsLayer({ x, y }: Dots): Layer {
  return {
    draw({ frame }) {
      const rows: object[] = [];
      x.forEach((east, i) => {
        if (Number.isFinite(east) && Number.isFinite(y[i])) rows.push({ x: specNumber(east), y: specNumber(y[i]) });
      });
      return rows.length === 0
        ? []
        : [unit(frame, { type: 'point', filled: true, size: 5, color: ink.faintLine, opacity: 0.9, tooltip: null }, rows)];
    },
  };
}
