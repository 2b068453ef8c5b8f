import { toPixels } from '../frame';
import type { Point } from '../geometry';
import { labelUnit, lineUnit, type Canvas, type Layer } from '../layer';
import { textBlock, type PlacedLabel } from '../place-labels';
import type { VegaSpec } from '../frame';
import { ink, textSize } from '../theme';

/** One contour: its number, its pieces. */
export interface ContourShape {
  readonly label: string;
  readonly pieces: readonly { readonly points: readonly Point[]; readonly dashed: boolean }[];
}

/** A label with a white edge, so that it can be read on a line. */
export function haloedLabels(canvas: Canvas, labels: readonly PlacedLabel[], style: VegaSpec = {}): readonly VegaSpec[] {
  if (labels.length === 0) return [];
  return [
    labelUnit(canvas.frame, labels, { ...style, color: ink.ground, stroke: ink.ground, strokeWidth: 4, strokeJoin: 'round' }),
    labelUnit(canvas.frame, labels, style),
  ];
}

/** Contours with their numbers set on them, as maps do: where there is most room to other contours and marks. */
export function contoursLayer(contours: readonly ContourShape[], marks: readonly Point[]): Layer {
  return {
    labelRank: -0.5,
    draw(canvas) {
      const { frame } = canvas;
      const style = { color: ink.line, strokeWidth: 1.1 };
      const lines = (dashed: boolean) =>
        contours.flatMap(({ pieces }) => pieces.filter((piece) => piece.dashed === dashed).map(({ points }) => points));
      const [whole, dashed] = [lines(false), lines(true)];
      const labels = placeNumbers(canvas, contours, marks);
      return [
        ...(whole.length === 0 ? [] : [lineUnit(frame, whole, style)]),
        ...(dashed.length === 0 ? [] : [lineUnit(frame, dashed, { ...style, strokeDash: [4, 3] })]),
        ...haloedLabels(canvas, labels, { color: ink.caption, fontSize: textSize.note }),
      ];
    },
  };
}

/** Room beyond this, in pixels, is no better: then the place nearest the middle of the contour is taken. */
const enough = 34;

function placeNumbers({ frame, placer }: Canvas, contours: readonly ContourShape[], marks: readonly Point[]): PlacedLabel[] {
  const pixels = contours.map(({ pieces }) => pieces.map(({ points }) => points.map((point) => toPixels(frame, point))));
  const solid = marks.map((point) => toPixels(frame, point));
  const edge = 18;
  const placed: PlacedLabel[] = [];
  contours.forEach(({ label }, own) => {
    const block = textBlock([label], { size: textSize.note });
    let best: { at: Point; score: number } | undefined;
    const others = [...pixels.flatMap((pieces, k) => (k === own ? [] : pieces.flat())), ...solid];
    const longest = pixels[own].reduce((most, piece) => (piece.length > most.length ? piece : most), [] as Point[]);
    longest.forEach((at, i) => {
      const [x, y] = at;
      if (x < edge || y < edge || x > frame.width - edge || y > frame.height - edge) return;
      let room = enough;
      for (const [ox, oy] of others) room = Math.min(room, Math.hypot(ox - x, oy - y));
      for (const { left, right, top, bottom } of placer.labels) room = Math.min(room, Math.max(left - x, x - right, top - y, y - bottom) - 4);
      const score = room - 10 * Math.abs(i / longest.length - 0.5);
      if (room > block.height * 0.75 && (best === undefined || score > best.score)) best = { at, score };
    });
    if (best === undefined) return;
    const [x, y] = best.at;
    const box = { left: x - block.width / 2, right: x + block.width / 2, top: y - block.height / 2, bottom: y + block.height / 2 };
    placer.avoidBox(box);
    placed.push({ x, y, lines: [label], box });
  });
  return placed;
}
