import { claimLine, labelUnit, lineRows, lineUnit, specNumber, unit, type Canvas, type Layer } from '../layer';
import { inWindow, toPixels, type VegaSpec } from '../frame';
import type { Point } from '../geometry';
import type { PlacedLabel } from '../place-labels';
import type { GroupScale } from '../groups';
import { groupColours, ink, textSize } from '../theme';

/** One line of a pattern: values at x = 0, 1, 2 …; NaN where there is none. */
export interface SeriesShape {
  readonly name: string;
  readonly values: ArrayLike<number>;
  /** Upper limits where a value is below detection; NaN elsewhere. Drawn as arrows. */
  readonly limits?: ArrayLike<number>;
  /** Name of its group in `groups`. */
  readonly group?: string;
  /** Lower and upper edge of a shaded band behind the line. */
  readonly band?: { readonly low: ArrayLike<number>; readonly high: ArrayLike<number> };
  /** Drawn open (altered). */
  readonly open?: boolean;
  /** Reference patterns: dashed, dark, without markers. */
  readonly reference?: boolean;
}

export interface SeriesOptions {
  readonly groups?: GroupScale;
  /** Names of the places along x, for tooltips. */
  readonly places: readonly string[];
  readonly valueTitle: string;
}

/** Above this many curves, lines alone are drawn, without markers. */
export const mostMarkedCurves = 300;

/** Stretches of known values; a gap between two stretches is bridged by a thin dashed line. */
function stretches(values: ArrayLike<number>): { solid: [number, number][][]; bridges: [number, number][][] } {
  const solid: [number, number][][] = [];
  const bridges: [number, number][][] = [];
  let current: [number, number][] = [];
  let last: [number, number] | undefined;
  for (let i = 0; i < values.length; i++) {
    if (!(values[i] > 0)) continue;
    const point: [number, number] = [i, values[i]];
    if (last !== undefined && i - last[0] > 1) {
      if (current.length > 0) solid.push(current);
      bridges.push([last, point]);
      current = [];
    }
    current.push(point);
    last = point;
  }
  if (current.length > 0) solid.push(current);
  return { solid, bridges };
}

/** Patterns: a line with markers a sample or group, bands behind, gaps bridged by dashes, limits as arrows. */
export function seriesLayer(series: readonly SeriesShape[], options: SeriesOptions): Layer {
  const { groups, places, valueTitle } = options;
  const many = series.length > 40;
  const references = series.filter(({ reference }) => reference === true);
  const own = series.filter(({ reference }) => reference !== true);
  return {
    claim(canvas) {
      for (const { values } of references) for (const line of stretches(values).solid) claimLine(canvas, line);
      // Labels keep off the curves too, where there are few enough to leave room.
      if (!many) for (const { values } of own) for (const line of stretches(values).solid) avoidCurve(canvas, line);
    },
    draw(canvas) {
      const { frame, placer } = canvas;
      const units: VegaSpec[] = [];
      const colourOf = (group: string | undefined) => (groups === undefined || group === undefined ? groupColours[0] : groups.colourOf(group));
      const color = { field: 'c', type: 'nominal', scale: null };
      for (const { band, group } of series) if (band !== undefined) units.push(bandUnit(canvas, band, colourOf(group)));
      const filtered = groups === undefined ? {} : { opacity: { condition: { param: 'pick0', value: many ? 0.45 : 0.9 }, value: 0.05 } };
      const stretched = own.map(({ values, group }) => ({ ...stretches(values), group }));
      const groupNames = [...new Set(own.map(({ group }) => group))];
      const rows = (kind: 'solid' | 'bridges') =>
        groupNames.flatMap((name) =>
          lineRows(
            stretched.filter(({ group }) => group === name).flatMap((each) => each[kind]),
            { c: colourOf(name), ...(name === undefined ? {} : { g: name }) },
          ),
        );
      const lineStyle = (style: object, kind: 'solid' | 'bridges') =>
        unit(frame, { type: 'line', strokeJoin: 'round', tooltip: null, ...style }, rows(kind), {
          color,
          detail: { field: groups === undefined ? 'c' : 'g', type: 'nominal' },
          order: { field: 'i', type: 'quantitative' },
          ...filtered,
        });
      const bridges = lineStyle({ strokeWidth: 0.9, strokeDash: [2, 3] }, 'bridges');
      if ((bridges['data'] as { values: unknown[] }).values.length > 0) units.push(bridges);
      units.push(lineStyle({ strokeWidth: many ? 0.8 : 1.5 }, 'solid'));
      const names: PlacedLabel[] = [];
      for (const { values, name } of references) {
        const { solid } = stretches(values);
        units.push(lineUnit(frame, solid, { color: ink.path, strokeWidth: 1.2, strokeDash: [6, 3] }));
        const anchors = solid
          .flat()
          .reverse()
          .filter(([x, y]) => inWindow(frame, x, y))
          .map((point) => toPixels(frame, point));
        const placed = placer.placeBeside(anchors, [name.replace(/\s*\([^)]*\)\s*$/, '')], { size: textSize.note }, 6);
        if (placed !== undefined) names.push(placed);
      }
      if (names.length > 0) units.push(labelUnit(frame, names, { color: ink.path }));
      return [
        ...units,
        ...limitUnits(canvas, own, colourOf, filtered),
        markerUnit(canvas, own, { groups, places, valueTitle, filtered, many, few: series.length <= mostMarkedCurves }),
      ];
    },
  };
}

function avoidCurve({ frame, placer }: Canvas, line: readonly Point[]): void {
  const pixels = line.map((point) => toPixels(frame, point));
  for (let i = 1; i < pixels.length; i++) {
    const [[ax, ay], [bx, by]] = [pixels[i - 1], pixels[i]];
    const steps = Math.max(1, Math.ceil(Math.hypot(bx - ax, by - ay) / 4));
    for (let k = 0; k <= steps; k++) placer.avoidPoint(ax + ((bx - ax) * k) / steps, ay + ((by - ay) * k) / steps);
  }
}

function bandUnit({ frame }: Canvas, { low, high }: NonNullable<SeriesShape['band']>, colour: string): VegaSpec {
  const rows: object[] = [];
  for (let x = 0; x < low.length; x++) if (low[x] > 0 && high[x] > 0) rows.push({ x, y: specNumber(low[x]), y2: specNumber(high[x]) });
  return unit(frame, { type: 'area', color: colour, opacity: 0.16, interpolate: 'linear', tooltip: null }, rows, { y2: { field: 'y2' } });
}

function limitUnits(
  { frame }: Canvas,
  series: readonly SeriesShape[],
  colourOf: (group: string | undefined) => string,
  filtered: object,
): VegaSpec[] {
  const rows = series
    .flatMap(({ limits, group, name }) =>
      Array.from(limits ?? [], (limit, x) => ({ x, y: limit, name, c: colourOf(group), ...(group === undefined ? {} : { g: group }) })),
    )
    .filter(({ y }) => y > 0)
    .map((row) => ({ ...row, y: specNumber(row.y) }));
  const arrow = 'M-0.7,-0.15L0.7,-0.15L0.7,0.1L0.12,0.1L0.12,1L0.5,1L0,1.8L-0.5,1L-0.12,1L-0.12,0.1L-0.7,0.1Z';
  const tooltip = [
    { field: 'name', type: 'nominal', title: 'sample' },
    { field: 'y', type: 'quantitative', title: 'below', format: '.3~g' },
  ];
  return rows.length === 0
    ? []
    : [
        unit(frame, { type: 'point', filled: true, shape: arrow, size: 80 }, rows, {
          fill: { field: 'c', type: 'nominal', scale: null },
          tooltip,
          ...filtered,
        }),
      ];
}

interface MarkerStyle {
  readonly groups?: GroupScale;
  readonly places: readonly string[];
  readonly valueTitle: string;
  readonly filtered: object;
  readonly many: boolean;
  /** Few enough curves for markers, and tooltips with them. */
  readonly few: boolean;
}

function markerUnit(
  { frame, panel }: Canvas,
  series: readonly SeriesShape[],
  { groups, places, valueTitle, filtered, many, few }: MarkerStyle,
): VegaSpec {
  const rows = (few ? series : [])
    .flatMap(({ values, group, name, open }) =>
      Array.from(values, (y, x) => ({
        x,
        y,
        n: name,
        e: places[x],
        ...(group === undefined ? {} : { g: group }),
        ...(open === true ? { o: group === undefined ? groupColours[0] : groups!.colourOf(group) } : {}),
      })),
    )
    .filter(({ y }) => y > 0)
    .map((row) => ({ ...row, y: specNumber(row.y) }));
  const legend = groups?.legend ?? null;
  return {
    ...unit(frame, { type: 'point', size: many ? 10 : 40, strokeWidth: many ? 0 : 0.6 }, rows, {
      fill: {
        condition: { test: 'isValid(datum.o)', value: ink.ground },
        ...(groups === undefined ? { value: groupColours[0] } : { field: 'g', type: 'nominal', scale: groups.colours, legend }),
      },
      stroke: { condition: { test: 'isValid(datum.o)', field: 'o', type: 'nominal', scale: null }, value: ink.ground },
      ...(groups === undefined ? { shape: { value: 'circle' } } : { shape: { field: 'g', type: 'nominal', scale: groups.shapes, legend } }),
      tooltip: [
        { field: 'n', type: 'nominal', title: 'sample' },
        ...(groups === undefined ? [] : [{ field: 'g', type: 'nominal', title: groups.title }]),
        { field: 'e', type: 'nominal', title: 'element' },
        { field: 'y', type: 'quantitative', title: valueTitle, format: '.3~g' },
      ],
      ...filtered,
    }),
    params: [
      { name: `zoom${panel}`, select: 'interval', bind: 'scales' },
      ...(groups === undefined || panel > 0 ? [] : [{ name: 'pick0', select: { type: 'point', fields: ['g'] }, bind: 'legend' }]),
    ],
  };
}
