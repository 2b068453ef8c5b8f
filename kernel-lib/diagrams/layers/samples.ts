import { lineRows, specNumber, unit, type Canvas, type Layer } from '../layer';
import { positionChannels } from '../axes';
import { fromPixels, isDrawable, toPixels, type Frame, type VegaSpec } from '../frame';
import type { Point } from '../geometry';
import type { GroupScale } from '../groups';
import { groupColours, ink, markerArea } from '../theme';

/** Where a value that is only bounded lies: 0 it is known; 1 below, 2 above (y); 3 left, 4 right (x) of the drawn limit. */
export const pointSide = { known: 0, below: 1, above: 2, left: 3, right: 4 } as const;

/** The samples of one panel as columns; a sample with NaN in x or y is not drawn. */
export interface SamplePoints {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** One of `pointSide` a sample; absent when every value is known. */
  readonly side?: Uint8Array;
  /** Number of the group of each sample in `groups.names`. */
  readonly group?: Uint16Array;
  readonly groups?: GroupScale;
  /** 1 for samples drawn open (altered). */
  readonly open?: Uint8Array;
  /** 1σ along each axis. */
  readonly sigmaX?: Float64Array;
  readonly sigmaY?: Float64Array;
  /** What hovering shows, besides the axes: title → one value a sample. */
  readonly tooltips: ReadonlyMap<string, ArrayLike<string | number>>;
  readonly axisTitles: readonly [string, string];
}

export interface SamplesOptions {
  readonly errors?: 'none' | 'bars' | 'ellipses';
  /** Above this many samples, bins with a count scale are drawn instead (default 5,000). */
  readonly binAbove?: number;
  /** Top of the count scale, for panels that share one (default: the fullest bin). */
  readonly binMost?: number;
  /** Smaller markers, for one of several small panels; the first panel carries the filter of the legend that all share. */
  readonly inPanel?: boolean;
  /** Zoom and pan by mouse (default true); triangles have none, because their ticks and corners stand outside the frame. */
  readonly zoom?: boolean;
}

const mostEllipses = 600;
const oneColour = groupColours[0];
const isOpen = 'isValid(datum.o)';

/**
 * The samples of a suite: marker and colour by group, open where altered, an arrow where a value is only bounded; zoom and pan by mouse,
 * and a click on a legend entry shows that group alone (where the front end draws Vega). Above some 5,000 samples: counts in bins.
 */
export function samplesLayer(points: SamplePoints, options: SamplesOptions = {}): Layer {
  const { x, y } = points;
  let drawn = 0;
  for (let i = 0; i < x.length; i++) if (Number.isFinite(x[i]) && Number.isFinite(y[i])) drawn++;
  return {
    claim({ frame, placer }) {
      for (let i = 0; i < x.length; i++) {
        if (!isDrawable(frame, x[i], y[i])) continue;
        const [px, py] = toPixels(frame, [x[i], y[i]]);
        placer.avoidPoint(px, py);
        if (options.errors === 'bars') avoidBars(placer, frame, points, i);
      }
    },
    draw: (canvas) => (drawn > (options.binAbove ?? 5000) ? drawBins(canvas, points, options) : drawMarkers(canvas, points, options, drawn)),
  };
}

/** Error bars are kept clear like the samples themselves. */
function avoidBars(placer: Canvas['placer'], frame: Frame, { x, y, sigmaX, sigmaY }: SamplePoints, i: number): void {
  for (const part of [-1, -0.75, -0.5, -0.25, 0.25, 0.5, 0.75, 1]) {
    if (sigmaX !== undefined && sigmaX[i] > 0) placer.avoidPoint(...toPixels(frame, [x[i] + part * sigmaX[i], y[i]]));
    if (sigmaY !== undefined && sigmaY[i] > 0) placer.avoidPoint(...toPixels(frame, [x[i], y[i] + part * sigmaY[i]]));
  }
}

function drawMarkers({ frame, panel }: Canvas, points: SamplePoints, options: SamplesOptions, drawn: number): VegaSpec[] {
  const { x, y, side, group, groups, open, tooltips } = points;
  const titles = [...tooltips.keys()];
  const known: object[] = [];
  const bounded: object[] = [];
  for (let i = 0; i < x.length; i++) {
    if (!isDrawable(frame, x[i], y[i])) continue;
    const row: Record<string, unknown> = { x: specNumber(x[i]), y: specNumber(y[i]) };
    if (groups !== undefined) row['g'] = groups.names[group![i]];
    if (open !== undefined && open[i] === 1) row['o'] = groups === undefined ? oneColour : groups.colourOf(groups.names[group![i]]);
    titles.forEach((title, k) => (row[`t${k}`] = tooltips.get(title)![i]));
    if (side !== undefined && side[i] !== pointSide.known)
      bounded.push({ ...row, d: side[i], c: groups === undefined ? oneColour : groups.colourOf(groups.names[group![i]]) });
    else known.push(row);
  }
  const area = options.inPanel === true ? Math.min(26, markerArea(drawn)) : markerArea(drawn);
  const filter = groups === undefined || panel > 0 ? undefined : 'pick0';
  const opacity = groups === undefined ? {} : { opacity: { condition: { param: 'pick0', value: 1 }, value: 0.06 } };
  const tooltip = [
    ...titles.map((title, k) => ({ field: `t${k}`, type: 'nominal', title })),
    { field: 'x', type: 'quantitative', title: points.axisTitles[0], format: '.6~g' },
    { field: 'y', type: 'quantitative', title: points.axisTitles[1], format: '.6~g' },
  ];
  const legend = groups?.legend ?? null;
  const markers: VegaSpec = {
    ...unit(frame, { type: 'point', size: area, fillOpacity: 0.88, strokeOpacity: 1 }, known, {
      shape: groups === undefined ? { value: 'circle' } : { field: 'g', type: 'nominal', scale: groups.shapes, legend },
      fill: {
        condition: { test: isOpen, value: ink.ground },
        ...(groups === undefined ? { value: oneColour } : { field: 'g', type: 'nominal', scale: groups.colours, legend }),
      },
      // Colours that come with the row, past any scale, leave the legend alone.
      stroke: { condition: { test: isOpen, field: 'o', type: 'nominal', scale: null }, value: ink.ground },
      strokeWidth: { condition: { test: isOpen, value: 1.4 }, value: 0.6 },
      ...opacity,
      tooltip,
    }),
    params: [
      ...zoomParam(panel, options),
      ...(filter === undefined ? [] : [{ name: filter, select: { type: 'point', fields: ['g'] }, bind: 'legend' }]),
    ],
  };
  const errors = options.errors === undefined || options.errors === 'none' ? [] : [errorUnit(frame, points, options.errors, opacity)];
  return [...errors, ...(bounded.length === 0 ? [] : boundedUnits(frame, bounded, area, tooltip, opacity)), markers];
}

function zoomParam(panel: number, { zoom = true }: SamplesOptions): VegaSpec[] {
  return zoom ? [{ name: `zoom${panel}`, select: 'interval', bind: 'scales' }] : [];
}

/** A bar at the limit, and an arrow away from it to where the value lies. */
const arrows: Readonly<Record<number, string>> = {
  [pointSide.below]: 'M-0.7,-0.15L0.7,-0.15L0.7,0.1L0.12,0.1L0.12,1L0.5,1L0,1.8L-0.5,1L-0.12,1L-0.12,0.1L-0.7,0.1Z',
  [pointSide.above]: 'M-0.7,0.15L0.7,0.15L0.7,-0.1L0.12,-0.1L0.12,-1L0.5,-1L0,-1.8L-0.5,-1L-0.12,-1L-0.12,-0.1L-0.7,-0.1Z',
  [pointSide.left]: 'M0.15,-0.7L0.15,0.7L-0.1,0.7L-0.1,0.12L-1,0.12L-1,0.5L-1.8,0L-1,-0.5L-1,-0.12L-0.1,-0.12L-0.1,-0.7Z',
  [pointSide.right]: 'M-0.15,-0.7L-0.15,0.7L0.1,0.7L0.1,0.12L1,0.12L1,0.5L1.8,0L1,-0.5L1,-0.12L0.1,-0.12L0.1,-0.7Z',
};

function boundedUnits(frame: Frame, rows: readonly object[], area: number, tooltip: readonly object[], opacity: object): VegaSpec[] {
  const fill = { field: 'c', type: 'nominal', scale: null };
  return Object.values(pointSide).flatMap((side) => {
    const these = rows.filter((row) => (row as { d: number }).d === side);
    return these.length === 0
      ? []
      : [unit(frame, { type: 'point', shape: arrows[side], size: Math.max(110, area * 2.4), strokeWidth: 0 }, these, { fill, ...opacity, tooltip })];
  });
}

function errorUnit(frame: Frame, points: SamplePoints, kind: 'bars' | 'ellipses', opacity: object): VegaSpec {
  const { x, y, sigmaX, sigmaY, group, groups } = points;
  const color = { field: 'c', type: 'nominal', scale: null };
  const ofGroup = (i: number) =>
    groups === undefined ? { c: oneColour } : { g: groups.names[group![i]], c: groups.colourOf(groups.names[group![i]]) };
  if (kind === 'bars') {
    const bars: object[] = [];
    for (let i = 0; i < x.length; i++) {
      if (!isDrawable(frame, x[i], y[i])) continue;
      const sx = sigmaX?.[i] ?? NaN;
      const sy = sigmaY?.[i] ?? NaN;
      if (sx > 0) bars.push({ x: specNumber(x[i] - sx), x2: specNumber(x[i] + sx), y: specNumber(y[i]), y2: specNumber(y[i]), ...ofGroup(i) });
      if (sy > 0) bars.push({ x: specNumber(x[i]), x2: specNumber(x[i]), y: specNumber(y[i] - sy), y2: specNumber(y[i] + sy), ...ofGroup(i) });
    }
    return unit(frame, { type: 'rule', strokeWidth: 0.9, strokeOpacity: 0.7, tooltip: null }, bars, {
      x2: { field: 'x2' },
      y2: { field: 'y2' },
      color,
      ...opacity,
    });
  }
  const byGroup = new Map<number, Point[][]>();
  let ellipses = 0;
  for (let i = 0; i < x.length; i++) {
    const sx = sigmaX?.[i] ?? NaN;
    const sy = sigmaY?.[i] ?? NaN;
    if (!isDrawable(frame, x[i], y[i]) || !(sx > 0 && sy > 0)) continue;
    if (++ellipses > mostEllipses)
      throw new RangeError(`Error ellipses are drawn for up to ${mostEllipses} samples; choose errors: "bars", or draw fewer samples.`);
    const g = group?.[i] ?? 0;
    if (!byGroup.has(g)) byGroup.set(g, []);
    byGroup
      .get(g)!
      .push(Array.from({ length: 33 }, (_, k): Point => [x[i] + sx * Math.cos((k * Math.PI) / 16), y[i] + sy * Math.sin((k * Math.PI) / 16)]));
  }
  const rows = [...byGroup].flatMap(([g, outlines]) =>
    lineRows(outlines, groups === undefined ? { c: oneColour } : { g: groups.names[g], c: groups.colourOf(groups.names[g]) }),
  );
  return unit(frame, { type: 'line', strokeWidth: 0.8, strokeOpacity: 0.8, tooltip: null }, rows, {
    color,
    detail: { field: groups === undefined ? 'c' : 'g', type: 'nominal' },
    order: { field: 'i', type: 'quantitative' },
    ...opacity,
  });
}

const binSize = 7;

/** Samples in each square bin of the frame, row by row. */
function countBins(frame: Frame, { x, y }: SamplePoints): { readonly counts: Uint32Array; readonly columns: number } {
  const columns = Math.ceil(frame.width / binSize);
  const counts = new Uint32Array(columns * Math.ceil(frame.height / binSize));
  for (let i = 0; i < x.length; i++) {
    if (!isDrawable(frame, x[i], y[i])) continue;
    const [px, py] = toPixels(frame, [x[i], y[i]]);
    if (px >= 0 && py >= 0 && px < frame.width && py < frame.height) counts[Math.floor(py / binSize) * columns + Math.floor(px / binSize)]++;
  }
  return { counts, columns };
}

/** The fullest bin of a frame, so that panels can share one scale. */
export function mostInBin(frame: Frame, points: SamplePoints): number {
  return countBins(frame, points).counts.reduce((most, count) => Math.max(most, count), 0);
}

/** Counts in square bins of the frame, coloured on a log scale. */
function drawBins({ frame, panel }: Canvas, points: SamplePoints, options: SamplesOptions): VegaSpec[] {
  const { counts, columns } = countBins(frame, points);
  const bins: object[] = [];
  let most = options.binMost ?? 0;
  counts.forEach((count, at) => {
    if (count === 0) return;
    if (count > most) most = count;
    const left = (at % columns) * binSize;
    const top = Math.floor(at / columns) * binSize;
    const [x0, y0] = fromPixels(frame, [left, top]);
    const [x1, y1] = fromPixels(frame, [left + binSize, top + binSize]);
    bins.push({ x: specNumber(x0), x2: specNumber(x1), y: specNumber(y0), y2: specNumber(y1), n: count });
  });
  const legend = { title: 'samples in bin', gradientLength: 140, tickCount: 4, format: 'd' };
  return [
    {
      data: { values: bins },
      mark: { type: 'rect', clip: true, strokeWidth: 0 },
      encoding: {
        ...positionChannels(frame),
        x2: { field: 'x2' },
        y2: { field: 'y2' },
        color: { field: 'n', type: 'quantitative', scale: { type: 'log', scheme: 'viridis', reverse: true, domain: [1, Math.max(2, most)] }, legend },
        tooltip: [{ field: 'n', type: 'quantitative', title: 'samples' }],
      },
      params: zoomParam(panel, options),
    },
  ];
}
