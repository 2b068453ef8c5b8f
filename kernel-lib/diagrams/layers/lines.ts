import { claimLine, labelUnit, lineUnit, unit, specNumber, type Canvas, type Layer } from '../layer';
import { frameBox, toPixels, type Frame } from '../frame';
import { segmentMeetsBox, type Point } from '../geometry';
import type { PlacedLabel } from '../place-labels';
import { ink, textSize } from '../theme';

/** A boundary or reference line. */
export interface LineShape {
  readonly points: readonly Point[];
  /** Set beside the line, inside the frame. */
  readonly label?: string;
  readonly dash?: readonly number[];
  readonly colour?: string;
  readonly width?: number;
}

/** Lines in data coordinates, with labels beside them. */
export function linesLayer(lines: readonly LineShape[]): Layer {
  return {
    labelRank: 1,
    claim: (canvas) => lines.forEach(({ points }) => claimLine(canvas, points)),
    draw(canvas) {
      const styles = new Map<string, LineShape[]>();
      for (const line of lines) {
        const style = JSON.stringify([line.dash, line.colour, line.width]);
        styles.set(style, [...(styles.get(style) ?? []), line]);
      }
      const units = [...styles.values()].map((alike) => {
        const { dash, colour = ink.line, width = 1.1 } = alike[0];
        return lineUnit(
          canvas.frame,
          alike.map(({ points }) => points),
          { color: colour, strokeWidth: width, ...(dash === undefined ? {} : { strokeDash: dash }) },
        );
      });
      const labels = lines.flatMap(({ label, points }) => (label === undefined ? [] : labelOnLine(canvas, label, points)));
      return labels.length === 0 ? units : [...units, labelUnit(canvas.frame, labels, { color: ink.caption, fontSize: textSize.note })];
    },
  };
}

/** Tries places along the visible part of the line, from its far end back. */
function labelOnLine({ frame, placer }: Canvas, label: string, points: readonly Point[]): PlacedLabel[] {
  const box = frameBox(frame);
  const pixels = points.map((point) => toPixels(frame, point));
  const stops: Point[] = [];
  for (let i = pixels.length - 1; i > 0; i--) {
    const [a, b] = [pixels[i], pixels[i - 1]];
    if (!segmentMeetsBox(a, b, box)) continue;
    const steps = Math.max(1, Math.round(Math.hypot(a[0] - b[0], a[1] - b[1]) / 12));
    for (let k = 0; k <= steps; k++) stops.push([a[0] + ((b[0] - a[0]) * k) / steps, a[1] + ((b[1] - a[1]) * k) / steps]);
  }
  const inside = stops.filter(([x, y]) => x >= 0 && x <= frame.width && y >= 0 && y <= frame.height);
  return [placer.placeBeside(inside, [label], { size: textSize.note }, 5)].filter((placed) => placed !== undefined);
}

/** The points of y = f(x) across a window, close enough to draw a curve on either scale. */
export function curve(frame: Frame, f: (x: number) => number, from = frame.x.window[0], to = frame.x.window[1], steps = 80): Point[] {
  const log = frame.x.scale === 'log';
  const points: Point[] = [];
  for (let i = 0; i <= steps; i++) {
    const x = log ? from * (to / from) ** (i / steps) : from + ((to - from) * i) / steps;
    const y = f(x);
    if (Number.isFinite(y) && (frame.y.scale !== 'log' || y > 0)) points.push([x, y]);
  }
  return points;
}

/** A shaded area between a lower and an upper curve over the same x. */
export interface BandShape {
  readonly x: ArrayLike<number>;
  readonly low: ArrayLike<number>;
  readonly high: ArrayLike<number>;
  readonly colour?: string;
  readonly opacity?: number;
}

/** Shaded bands: quantile ranges, confidence intervals, ranges of silica. */
export function bandsLayer(bands: readonly BandShape[]): Layer {
  return {
    draw: ({ frame }) =>
      bands.map(({ x, low, high, colour = ink.line, opacity = 0.22 }) => {
        const rows = Array.from(x, (at, i) => ({ x: specNumber(at), y: specNumber(low[i]), y2: specNumber(high[i]) }));
        return unit(frame, { type: 'area', color: colour, opacity, interpolate: 'linear', line: false, tooltip: null }, rows, {
          y2: { field: 'y2' },
        });
      }),
  };
}
