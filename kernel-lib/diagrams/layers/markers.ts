import { claimLine, labelUnit, lineUnit, specNumber, unit, type Canvas, type Layer } from '../layer';
import { inWindow, toPixels } from '../frame';
import type { Point } from '../geometry';
import type { PlacedLabel } from '../place-labels';
import { ink, textSize } from '../theme';

/** A named place: a reservoir, a mineral, a melt. */
export interface MarkerShape {
  readonly x: number;
  readonly y: number;
  readonly label: string;
  /** What hovering adds to the label, e.g. the source. */
  readonly note?: string;
}

const star = 'M0,-1L0.26,-0.33L0.97,-0.31L0.41,0.13L0.6,0.81L0,0.42L-0.6,0.81L-0.41,0.13L-0.97,-0.31L-0.26,-0.33Z';

/** Labelled dark stars, for reservoirs and end members. Those outside the window are left out. */
export function markersLayer(markers: readonly MarkerShape[], options: { readonly shape?: string; readonly colour?: string } = {}): Layer {
  const { shape = star, colour = ink.text } = options;
  const area = 110;
  return {
    labelRank: 0,
    claim: ({ frame, placer }) => visible(frame, markers).forEach((marker) => placer.avoidBox(boxAround(toPixels(frame, [marker.x, marker.y]), 5))),
    draw(canvas) {
      const shown = visible(canvas.frame, markers);
      const rows = shown.map(({ x, y, label, note }) => ({
        x: specNumber(x),
        y: specNumber(y),
        name: label,
        ...(note === undefined ? {} : { note }),
      }));
      const tooltip = [
        { field: 'name', type: 'nominal', title: 'name' },
        ...(shown.some(({ note }) => note !== undefined) ? [{ field: 'note', type: 'nominal', title: 'source' }] : []),
      ];
      const stars = unit(
        canvas.frame,
        { type: 'point', filled: true, shape, size: area, color: colour, opacity: 1, stroke: '#ffffff', strokeWidth: 0.8 },
        rows,
        { tooltip },
      );
      return rows.length === 0 ? [] : [stars, labelUnit(canvas.frame, besideEach(canvas, shown, 8), { color: ink.text, fontSize: textSize.note })];
    },
  };
}

function visible<Shape extends { x: number; y: number }>(frame: Canvas['frame'], shapes: readonly Shape[]): Shape[] {
  return shapes.filter(({ x, y }) => inWindow(frame, x, y));
}

function boxAround([x, y]: Point, half: number) {
  return { left: x - half, right: x + half, top: y - half, bottom: y + half };
}

function besideEach({ frame, placer }: Canvas, shapes: readonly { x: number; y: number; label: string }[], reach: number): PlacedLabel[] {
  return shapes.flatMap(({ x, y, label }) => placer.placeBeside([toPixels(frame, [x, y])], [label], { size: textSize.note }, reach) ?? []);
}

/** A model path over the diagram. */
export interface PathShape {
  readonly points: readonly Point[];
  readonly label?: string;
  /** Marks along the path, e.g. melt fractions. */
  readonly ticks?: readonly { readonly x: number; readonly y: number; readonly label: string }[];
  readonly colour?: string;
  readonly dash?: readonly number[];
}

/** Paths of models: a line, small ticks with their values, and a name at the far end. */
export function pathsLayer(paths: readonly PathShape[]): Layer {
  return {
    labelRank: 0,
    claim(canvas) {
      const { frame, placer } = canvas;
      for (const { points, ticks = [] } of paths) {
        claimLine(canvas, points);
        for (const tick of visible(frame, ticks)) placer.avoidBox(boxAround(toPixels(frame, [tick.x, tick.y]), 2.5));
      }
    },
    draw(canvas) {
      const { frame } = canvas;
      return paths.flatMap((path) => {
        const { points, label, colour = ink.path, dash } = path;
        const ticks = visible(frame, path.ticks ?? []);
        const dots = unit(
          frame,
          { type: 'point', shape: 'circle', size: 16, filled: true, fill: ink.ground, stroke: colour, strokeWidth: 1.1, opacity: 1 },
          ticks.map((tick) => ({ x: specNumber(tick.x), y: specNumber(tick.y), name: tick.label })),
          { tooltip: [{ field: 'name', type: 'nominal', title: label ?? 'path' }] },
        );
        const name = label === undefined ? [] : nameAtEnd(canvas, points, label);
        const values = besideEach(canvas, ticks, 5);
        return [
          lineUnit(frame, [points], { color: colour, strokeWidth: 1.4, ...(dash === undefined ? {} : { strokeDash: dash }) }),
          ...(ticks.length === 0 ? [] : [dots]),
          ...(values.length === 0 ? [] : [labelUnit(frame, values, { fontSize: textSize.note - 1, color: colour })]),
          ...(name.length === 0 ? [] : [labelUnit(frame, name, { fontWeight: 600, color: colour })]),
        ];
      });
    },
  };
}

/** Beside the end of the path, or farther back where its end is crowded. */
function nameAtEnd({ frame, placer }: Canvas, points: readonly Point[], label: string): PlacedLabel[] {
  const anchors = [...points]
    .reverse()
    .filter(([x, y]) => inWindow(frame, x, y))
    .map((point) => toPixels(frame, point));
  const some = anchors.filter((_, i) => i % Math.ceil(anchors.length / 20) === 0);
  return [placer.placeBeside(some, [label], { size: textSize.note, bold: true }, 7)].filter((placed) => placed !== undefined);
}

/** An arrow that says what moves a composition: removal of a mineral, addition of a component. */
export interface VectorShape {
  readonly from: Point;
  readonly to: Point;
  readonly label?: string;
}

export function vectorsLayer(vectors: readonly VectorShape[]): Layer {
  return {
    labelRank: 0,
    claim: (canvas) => vectors.forEach(({ from, to }) => claimLine(canvas, [from, to])),
    draw(canvas) {
      const { frame, placer } = canvas;
      const heads = vectors.map(({ from, to }) => {
        const [ax, ay] = toPixels(frame, from);
        const [bx, by] = toPixels(frame, to);
        // The arrow head points up in its own frame.
        return { x: specNumber(to[0]), y: specNumber(to[1]), a: specNumber((Math.atan2(bx - ax, ay - by) * 180) / Math.PI) };
      });
      const labels = vectors.flatMap(({ to, label }) =>
        label === undefined ? [] : (placer.placeBeside([toPixels(frame, to)], [label], { size: textSize.note }, 7) ?? []),
      );
      return [
        lineUnit(
          frame,
          vectors.map(({ from, to }) => [from, to]),
          { color: ink.path, strokeWidth: 1.3 },
        ),
        unit(
          frame,
          { type: 'point', filled: true, shape: 'M0,-1L0.7,0.8L0,0.4L-0.7,0.8Z', size: 70, color: ink.path, opacity: 1, tooltip: null },
          heads,
          {
            angle: { field: 'a', type: 'quantitative', scale: { domain: [0, 360], range: [0, 360] } },
          },
        ),
        ...(labels.length === 0 ? [] : [labelUnit(frame, labels, { color: ink.path })]),
      ];
    },
  };
}
