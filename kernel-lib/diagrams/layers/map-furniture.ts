import { geodesic, longitudeNear } from '../../margin';
import { fromPixels, toPixels, type Frame } from '../frame';
import type { Point } from '../geometry';
import { claimLine, lineUnit, specNumber, unit, type Canvas, type Layer } from '../layer';
import { fontStack, ink, textSize } from '../theme';

/** Teeth along a trench stand this far apart, in pixels. */
const toothGap = 34;

/** A trench: a line with teeth on the side of the upper plate, which is on its right. */
export function trenchLayer(longitude: Float64Array, latitude: Float64Array, centre: number): Layer {
  const points = Array.from(longitude, (x, i): Point => [longitudeNear(x, centre), latitude[i]]);
  return {
    claim: (canvas) => claimLine(canvas, points),
    draw({ frame }) {
      const teeth: object[] = [];
      const pixels = points.map((point) => toPixels(frame, point));
      let next = toothGap / 2;
      let run = 0;
      for (let i = 1; i < pixels.length; i++) {
        const [ax, ay] = pixels[i - 1];
        const [bx, by] = pixels[i];
        const length = Math.hypot(bx - ax, by - ay);
        for (; next <= run + length; next += toothGap) {
          const t = (next - run) / length;
          // To the right of the way along the line, in pixels with y downwards.
          const right: Point = [-(by - ay) / length, (bx - ax) / length];
          const at: Point = [ax + t * (bx - ax) + 3.4 * right[0], ay + t * (by - ay) + 3.4 * right[1]];
          const [x, y] = fromPixels(frame, at);
          teeth.push({ x: specNumber(x), y: specNumber(y), a: specNumber(((Math.atan2(right[0], -right[1]) * 180) / Math.PI + 360) % 360) });
        }
        run += length;
      }
      return [
        lineUnit(frame, [points], { color: ink.text, strokeWidth: 1.6 }),
        unit(frame, { type: 'point', filled: true, shape: 'M-1,0.75L1,0.75L0,-0.85Z', size: 62, color: ink.text, opacity: 1, tooltip: null }, teeth, {
          angle: { field: 'a', type: 'quantitative', scale: { domain: [0, 360], range: [0, 360] } },
        }),
      ];
    },
  };
}

const barSteps = [1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000];

/** A scale bar for the middle latitude and a north arrow above it, in whichever corner holds least. */
export function compassLayer(frame: Frame): Layer {
  const [south, north] = frame.y.window;
  const [west, east] = frame.x.window;
  const middle = (south + north) / 2;
  const perPixel = (geodesic(west, middle, west + (east - west) / 100, middle).distance * 100) / frame.width;
  const km = barSteps.filter((length) => length / perPixel <= frame.width * 0.28).at(-1) ?? 1;
  const bar = km / perPixel;
  const size = { width: Math.max(bar, 30) + 22, height: 62 };
  let place: Point | undefined;
  const corner = (canvas: Canvas): Point => (place ??= emptiestCorner(canvas, size));
  return {
    // Asked before other layers draw, after all have told what is solid: labels keep off it.
    labelRank: -1,
    draw(canvas) {
      const [left, top] = corner(canvas);
      canvas.placer.avoidBox({ left, right: left + size.width, top, bottom: top + size.height });
      const x0 = left + (size.width - bar) / 2;
      const y0 = top + size.height - 12;
      const at = (x: number, y: number): Point => fromPixels(frame, [x, y]);
      const middleX = left + size.width / 2;
      const text = (words: string, x: number, y: number, weight: number | string) => {
        const [dx, dy] = at(x, y);
        return unit(
          frame,
          {
            type: 'text',
            text: words,
            align: 'center',
            baseline: 'bottom',
            font: fontStack,
            fontSize: textSize.note,
            fontWeight: weight,
            color: ink.text,
            tooltip: null,
          },
          [{ x: specNumber(dx), y: specNumber(dy) }],
        );
      };
      const [ax, ay] = at(middleX, top + 26);
      const [west2, north2] = at(left, top);
      const [east2, south2] = at(left + size.width, top + size.height);
      const ground = unit(
        frame,
        { type: 'rect', color: ink.ground, opacity: 0.85, tooltip: null },
        [{ x: specNumber(west2), y: specNumber(south2), x2: specNumber(east2), y2: specNumber(north2) }],
        { x2: { field: 'x2' }, y2: { field: 'y2' } },
      );
      return [
        ground,
        lineUnit(frame, [[at(x0, y0 - 4), at(x0, y0), at(x0 + bar, y0), at(x0 + bar, y0 - 4)]], { color: ink.text, strokeWidth: 1.4 }),
        text(`${km} km`, middleX, y0 - 3, 'normal'),
        unit(
          frame,
          { type: 'point', filled: true, shape: 'M0,-1.3L0.62,0.9L0,0.45L-0.62,0.9Z', size: 110, color: ink.text, opacity: 1, tooltip: null },
          [{ x: specNumber(ax), y: specNumber(ay) }],
        ),
        text('N', middleX, top + 14, 600),
      ];
    },
  };
}

/** Corners are tried from the bottom left; the first that nothing solid stands in, else the bottom left. */
function emptiestCorner({ frame, placer }: Canvas, size: { width: number; height: number }): Point {
  const pad = 8;
  const corners: Point[] = [
    [pad, frame.height - size.height - pad],
    [frame.width - size.width - pad, frame.height - size.height - pad],
    [pad, pad],
    [frame.width - size.width - pad, pad],
  ];
  return corners.find(([left, top]) => placer.isFreeBox({ left, right: left + size.width, top, bottom: top + size.height })) ?? corners[0];
}
