import { contours } from 'd3-contour';
import { fromPixels } from '../frame';
import type { Point } from '../geometry';
import { lineRows, unit, type Layer } from '../layer';

/** Distance between the points that are asked, in pixels. */
const mesh = 4;
/** Levels of doubt at which the grey gets darker. */
const levels = [0.03, 0.08, 0.15, 0.24, 0.34] as const;

/**
 * Grey where something is in doubt, darker by steps as the number that `doubt` gives rises from 0 to 0.5.
 *
 * @param doubt numbers for points given in data coordinates; NaN counts as none
 */
export function shadingLayer(doubt: (points: readonly Point[]) => ArrayLike<number>): Layer {
  return {
    draw({ frame }) {
      const across = Math.floor(frame.width / mesh) + 1;
      const down = Math.floor(frame.height / mesh) + 1;
      const points: Point[] = [];
      for (let j = 0; j < down; j++) for (let i = 0; i < across; i++) points.push(fromPixels(frame, [i * mesh, j * mesh]));
      const numbers = Array.from(doubt(points), (value) => (Number.isFinite(value) ? value : 0));
      // d3-contour takes a number to stand in the middle of its cell.
      const place = ([x, y]: Point): Point => fromPixels(frame, [(x - 0.5) * mesh, (y - 0.5) * mesh]);
      const rings = contours()
        .size([across, down])
        .thresholds([...levels])(numbers)
        .map(({ coordinates }) => ({ outlines: coordinates.flat().map((ring) => straightened(ring as [number, number][]).map(place)) }))
        .filter(({ outlines }) => outlines.length > 0);
      // One filled path a level; holes run the other way round, so they stay open.
      return rings.map(({ outlines }) =>
        unit(
          frame,
          { type: 'line', interpolate: 'linear', filled: true, fill: '#6f7f8f', fillOpacity: 0.13, stroke: null, strokeWidth: 0, tooltip: null },
          lineRows(outlines),
          { order: { field: 'i', type: 'quantitative' } },
        ),
      );
    },
  };
}

/** A ring without the points that lie on the way between their neighbours (within a twentieth of the mesh). */
function straightened(ring: readonly Point[]): Point[] {
  const kept: Point[] = [ring[0]];
  for (let i = 1; i < ring.length - 1; i++) {
    const [ax, ay] = kept[kept.length - 1];
    const [bx, by] = ring[i + 1];
    const away = Math.abs((bx - ax) * (ring[i][1] - ay) - (by - ay) * (ring[i][0] - ax)) / Math.hypot(bx - ax, by - ay);
    if (!(away < 0.05)) kept.push(ring[i]);
  }
  kept.push(ring[ring.length - 1]);
  return kept;
}
