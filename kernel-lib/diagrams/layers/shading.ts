import { fromPixels } from '../frame';
import type { Point } from '../geometry';
import { specNumber, unit, type Layer } from '../layer';

/** Size of a shaded cell, in pixels. */
const cell = 4;
/** Below this a cell is left white; a tenth of it would only make the file large. */
const least = 0.03;

/**
 * Grey where something is in doubt: each small cell of the frame as dark as the number that `doubt` gives for its middle (0 to 0.5).
 *
 * @param doubt numbers for points given in data coordinates
 */
export function shadingLayer(doubt: (points: readonly Point[]) => ArrayLike<number>): Layer {
  return {
    draw({ frame }) {
      const middles: Point[] = [];
      for (let py = cell / 2; py < frame.height; py += cell) for (let px = cell / 2; px < frame.width; px += cell) middles.push([px, py]);
      const numbers = doubt(middles.map((point) => fromPixels(frame, point)));
      // Cells side by side of one grey are drawn as one.
      const rows: { x: number; x2: number; y: number; y2: number; q: number; py: number; px2: number }[] = [];
      middles.forEach(([px, py], i) => {
        const q = Math.round(Math.min(0.5, numbers[i]) * 20) / 20;
        if (!(numbers[i] >= least)) return;
        const grey = Math.max(0.05, q);
        const [x, y] = fromPixels(frame, [px - cell / 2, py + cell / 2]);
        const [x2, y2] = fromPixels(frame, [px + cell / 2, py - cell / 2]);
        const before = rows.at(-1);
        if (before !== undefined && before.py === py && before.px2 === px - cell / 2 && before.q === grey) {
          before.x2 = specNumber(x2);
          before.px2 = px + cell / 2;
        } else rows.push({ x: specNumber(x), x2: specNumber(x2), y: specNumber(y), y2: specNumber(y2), q: grey, py, px2: px + cell / 2 });
      });
      const data = rows.map(({ x, x2, y, y2, q }) => ({ x, x2, y, y2, q }));
      if (data.length === 0) return [];
      return [
        unit(frame, { type: 'rect', color: '#6f7f8f', strokeWidth: 0, tooltip: null }, data, {
          x2: { field: 'x2' },
          y2: { field: 'y2' },
          opacity: { field: 'q', type: 'quantitative', scale: { domain: [0, 0.5], range: [0, 0.55] }, legend: null },
        }),
      ];
    },
  };
}
