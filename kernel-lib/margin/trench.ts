import { step, type Step } from '../suite';
import { geodesic, planeAbout, centreOf, type Plane } from './geodesy';
import { checkedPoints, readPointTable, wantedLatitude, wantedLongitude } from './table-input';

/** A line at the surface that distances are measured from: the trench, or the shallowest contour of a slab. */
export interface TrenchLine {
  readonly longitude: Float64Array;
  readonly latitude: Float64Array;
  /** What the line is, for captions: `trench`, `20 km contour`. */
  readonly name: string;
  readonly lineage: readonly Step[];
}

/**
 * A trench line from its points, in order along the trench.
 *
 * @param longitudes degrees east (n ≥ 2; across the dateline is fine)
 * @param latitudes degrees north (n)
 * @param options `name`: what the line is (default `trench`)
 * @throws RangeError for fewer than two points, unequal lengths or positions outside the globe
 * @example trenchLine([-128.4, -128.6], [-43, -46])
 */
export function trenchLine(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>, options: { readonly name?: string } = {}): TrenchLine {
  checkedPoints(longitudes, latitudes, 'trenchLine');
  const longitude = Float64Array.from(longitudes);
  const latitude = Float64Array.from(latitudes);
  if (longitude.length < 2)
    throw new RangeError(`trenchLine: a line needs at least two points, in order along the trench; ${longitude.length} given.`);
  if (longitude.some(Number.isNaN) || latitude.some(Number.isNaN))
    throw new RangeError('trenchLine: a point without longitude or latitude cannot stand in a line. Leave it out.');
  return {
    longitude,
    latitude,
    name: options.name ?? 'trench',
    lineage: [step('trenchLine', { points: longitude.length, name: options.name ?? 'trench' })],
  };
}

/**
 * Reads a trench line: a CSV with longitude and latitude columns, points in order along the trench.
 *
 * @param path CSV file
 * @throws PointTableError naming file, line and column
 */
export async function readTrench(path: string): Promise<TrenchLine> {
  const table = await readPointTable(path, [wantedLongitude, wantedLatitude], 'readTrench');
  const line = trenchLine(table.numbers.longitude!, table.numbers.latitude!);
  return { ...line, lineage: [step('readTrench', { file: table.file, sha256: table.sha256, points: table.size })] };
}

/** The line with its points in the other order. */
export function reversedTrench(line: TrenchLine): TrenchLine {
  return { ...line, longitude: line.longitude.slice().reverse(), latitude: line.latitude.slice().reverse() };
}

/** Distance from a line and position along it, for many points. */
export interface LineMeasure {
  /** km on the ellipsoid to the nearest point of the line; positive on the right-hand side of its direction. */
  readonly distance: Float64Array;
  /** km along the line from its first point to the nearest point. */
  readonly along: Float64Array;
  /** 1 where the nearest point is an end of the line, so that the point may lie beyond the line. */
  readonly beyondEnd: Uint8Array;
}

/** Measures points against a line: the nearest place is found on a conformal plane, its distance on the ellipsoid. */
export function measureFromLine(
  line: TrenchLine,
  longitudes: ArrayLike<number>,
  latitudes: ArrayLike<number>,
  plane: Plane = planeAbout(centreOf(line.longitude, line.latitude)),
): LineMeasure {
  const { x: lineX, y: lineY } = plane.project(line.longitude, line.latitude);
  const { x, y } = plane.project(longitudes, latitudes);
  const last = lineX.length - 1;
  const upTo = new Float64Array(lineX.length);
  for (let j = 1; j <= last; j++)
    upTo[j] = upTo[j - 1] + geodesic(line.longitude[j - 1], line.latitude[j - 1], line.longitude[j], line.latitude[j]).distance;
  const distance = new Float64Array(x.length).fill(NaN);
  const along = new Float64Array(x.length).fill(NaN);
  const beyondEnd = new Uint8Array(x.length);
  for (let i = 0; i < x.length; i++) {
    if (Number.isNaN(x[i])) continue;
    let best = Infinity;
    let segment = 0;
    let fraction = 0;
    for (let j = 0; j < last; j++) {
      const dx = lineX[j + 1] - lineX[j];
      const dy = lineY[j + 1] - lineY[j];
      const length2 = dx * dx + dy * dy;
      const t = length2 === 0 ? 0 : Math.min(1, Math.max(0, ((x[i] - lineX[j]) * dx + (y[i] - lineY[j]) * dy) / length2));
      const d2 = (lineX[j] + t * dx - x[i]) ** 2 + (lineY[j] + t * dy - y[i]) ** 2;
      if (d2 < best) {
        best = d2;
        segment = j;
        fraction = t;
      }
    }
    const dx = lineX[segment + 1] - lineX[segment];
    const dy = lineY[segment + 1] - lineY[segment];
    const foot = plane.unproject(lineX[segment] + fraction * dx, lineY[segment] + fraction * dy);
    const side = dx * (y[i] - lineY[segment]) - dy * (x[i] - lineX[segment]);
    distance[i] = geodesic(longitudes[i], latitudes[i], foot.longitude, foot.latitude).distance * (side > 0 ? -1 : 1);
    along[i] = upTo[segment] + fraction * (upTo[segment + 1] - upTo[segment]);
    if ((segment === 0 && fraction === 0) || (segment === last - 1 && fraction === 1)) beyondEnd[i] = 1;
  }
  return { distance, along, beyondEnd };
}
