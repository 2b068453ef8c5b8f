import { positionChannels } from './axes';
import { fromPixels, toPixels, type Frame, type VegaSpec } from './frame';
import type { Point } from './geometry';
import { lineHeight, type LabelPlacer, type PlacedLabel } from './place-labels';
import { fontStack, ink, textSize } from './theme';

/** What a layer is drawn on. */
export interface Canvas {
  readonly frame: Frame;
  readonly placer: LabelPlacer;
  /** Number of the panel in its figure, from 0: names of parameters must differ between panels. */
  readonly panel: number;
}

/** One thing that a panel shows: fields, samples, a path … Layers are drawn in the order in which a panel lists them. */
export interface Layer {
  /** Tells the label placer of everything solid that this layer will draw. Called on all layers before any is drawn. */
  readonly claim?: (canvas: Canvas) => void;
  /** Layers that place labels are asked in this order, low first (default 0): those whose labels have little choice of place come first. */
  readonly labelRank?: number;
  /** The layer's Vega-Lite units, in drawing order. */
  readonly draw: (canvas: Canvas) => readonly VegaSpec[];
}

/** A number as it stands in a specification: six digits are finer than any screen. */
export function specNumber(value: number): number {
  return Number(value.toPrecision(6));
}

/** A unit of one mark on the frame's axes; its data rows hold `x` and `y`. */
export function unit(frame: Frame, mark: VegaSpec, rows: readonly object[], encoding: VegaSpec = {}): VegaSpec {
  return { data: { values: rows }, mark: { clip: true, ...mark }, encoding: { ...positionChannels(frame), ...encoding } };
}

/**
 * The data rows of lines: vertices in order (`i`), and an empty row between two lines, at which Vega breaks the path. One path for many
 * lines is drawn far faster than a mark for each.
 */
export function lineRows(lines: readonly (readonly Point[])[], more: object = {}): object[] {
  const rows: object[] = [];
  for (const points of lines) {
    if (rows.length > 0) rows.push({ x: null, y: null, i: rows.length, ...more });
    for (const [x, y] of points) rows.push({ x: specNumber(x), y: specNumber(y), i: rows.length, ...more });
  }
  return rows;
}

/** A unit of open lines in one style. */
export function lineUnit(frame: Frame, lines: readonly (readonly Point[])[], style: VegaSpec): VegaSpec {
  return unit(frame, { type: 'line', interpolate: 'linear', strokeJoin: 'round', tooltip: null, ...style }, lineRows(lines), {
    order: { field: 'i', type: 'quantitative' },
  });
}

/** A unit of texts at places found by the label placer. */
export function labelUnit(frame: Frame, labels: readonly PlacedLabel[], style: VegaSpec = {}): VegaSpec {
  const size = (style['fontSize'] as number | undefined) ?? textSize.note;
  const rows = labels.map(({ x, y, lines }) => {
    // Vega sets the first of several lines on the place itself, and the others below it.
    const [dx, dy] = fromPixels(frame, [x, y - ((lines.length - 1) * size * lineHeight) / 2]);
    return { x: specNumber(dx), y: specNumber(dy), t: lines.join('\n') };
  });
  const mark = {
    type: 'text',
    align: 'center',
    baseline: 'middle',
    lineBreak: '\n',
    font: fontStack,
    fontSize: size,
    lineHeight: size * lineHeight,
    color: ink.text,
    tooltip: null,
  };
  return unit(frame, { ...mark, ...style }, rows, { text: { field: 't', type: 'nominal' } });
}

/** Claims a polyline given in data coordinates. */
export function claimLine({ frame, placer }: Canvas, points: readonly Point[]): void {
  placer.avoidLine(points.map((point) => toPixels(frame, point)));
}
