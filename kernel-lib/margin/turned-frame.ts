import type { Plane } from './geodesy';
import { splineGrid, type SplineGrid } from './spline';

/** Most basis functions: what keeps a fit of 20,000 events under three seconds. */
const mostTerms = 320;

/** Events on a plane turned so that the deep seismicity is longest along x. */
export interface TurnedFrame {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly cosine: number;
  readonly sine: number;
  turn(points: { readonly x: Float64Array; readonly y: Float64Array }): { x: Float64Array; y: Float64Array };
}

/**
 * @throws RangeError where the events reach further than one slab, or the deep ones lie along a line
 */
export function turnedFrame(plane: Plane, longitude: Float64Array, latitude: Float64Array, depth: Float64Array, crustDepth: number): TurnedFrame {
  const flat = plane.project(longitude, latitude);
  let [n, meanX, meanY, xx, xy, yy, farthest] = [0, 0, 0, 0, 0, 0, 0];
  for (let i = 0; i < depth.length; i++) {
    farthest = Math.max(farthest, Math.hypot(flat.x[i], flat.y[i]));
    if (depth[i] < crustDepth) continue;
    n++;
    meanX += flat.x[i];
    meanY += flat.y[i];
  }
  if (farthest > 3000 || !Number.isFinite(farthest)) {
    throw new RangeError(
      `slabFromHypocentres: the events reach ${Math.round(farthest)} km from their centre, which is more than one slab. Choose one with { ` +
        'area: { west, east, south, north } }.',
    );
  }
  for (let i = 0; i < depth.length; i++) {
    if (depth[i] < crustDepth) continue;
    xx += (flat.x[i] - meanX / n) ** 2;
    xy += (flat.x[i] - meanX / n) * (flat.y[i] - meanY / n);
    yy += (flat.y[i] - meanY / n) ** 2;
  }
  const least = Math.sqrt(Math.max(0, (xx + yy) / 2 - Math.hypot((xx - yy) / 2, xy)) / n);
  if (least < 5) {
    throw new RangeError(
      `slabFromHypocentres: the events deeper than ${crustDepth} km lie along a line on the map (1σ across it ${least.toFixed(1)} km), so ` +
        'they define no surface. Take a wider area.',
    );
  }
  const angle = 0.5 * Math.atan2(2 * xy, xx - yy);
  const cosine = Math.cos(angle);
  const sine = Math.sin(angle);
  const turn = (points: { readonly x: Float64Array; readonly y: Float64Array }) => ({
    x: points.x.map((value, i) => cosine * value + sine * points.y[i]),
    y: points.y.map((value, i) => cosine * value - sine * points.x[i]),
  });
  return { ...turn(flat), cosine, sine, turn };
}

/** A spline grid over the events: knots as far apart as asked, or as few terms allow. */
export function gridFor(frame: TurnedFrame, spacing: number | undefined): SplineGrid {
  const range = (values: Float64Array) => [values.reduce((a, b) => Math.min(a, b), Infinity), values.reduce((a, b) => Math.max(a, b), -Infinity)];
  const [left, right] = range(frame.x);
  const [bottom, top] = range(frame.y);
  const box = { left, right, bottom, top };
  let knots = spacing ?? 50;
  let grid = splineGrid(box, knots);
  while (grid.size > mostTerms) grid = splineGrid(box, (knots *= 1.05));
  return grid;
}
