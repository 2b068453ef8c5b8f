import { showAs } from '../display';
import { step } from '../suite';
import { centreOf, longitudeNear, planeAbout, wrapAzimuth, type Plane } from './geodesy';
import { emptyBelow, slabSupport, type ShownSlabSurface, type SlabSurface } from './slab';
import type { SlabPoints } from './slab-points';
import { checkedPoints } from './table-input';
import { measureFromLine, reversedTrench, type TrenchLine } from './trench';
import { shallowestLine } from './shallowest-line';
import { TriangulatedSurface, type Located, type Sloped } from './triangulated';

/** How a surface is laid through published depths. */
export interface PublishedSlabOptions {
  /** Trench line to measure distances from (default: the shallowest contour, where it is at 20 km or less). */
  readonly trench?: TrenchLine;
  /** 1σ of the published depths in km, which contour files do not carry (default 10; from memory, set it from your source). */
  readonly sigma?: number;
  /** Longest gap in km between data that is bridged without saying so (default 150); gaps of twice that are not bridged. */
  readonly reach?: number;
}

/**
 * A slab surface through published depth contours or a grid.
 *
 * Points are triangulated (Delaunay) on a conformal plane about the slab's centre, so the dateline is no seam; the surface inside each
 * triangle is curved by the slopes at its corners (exact for quadratic surfaces). Below a triangle with an edge longer than `reach` the depth
 * is given but marked as extrapolated; beyond twice the reach, and outside the outline of the data, there is none.
 *
 * @param points one slab, from `readSlabPoints` or `slabPoints`
 * @param options `trench`, `sigma` (km), `reach` (km)
 * @returns a surface with `depthAt(longitudes, latitudes)` in km and `at(…)` with 1σ, dip, strike, support
 * @throws RangeError for fewer than three depths, or points on one line
 * @example const slab = slabFromDepths(await readSlabPoints('data/slab-depths.csv', { slab: 'kur' }))
 */
export function slabFromDepths(points: SlabPoints, options: PublishedSlabOptions = {}): ShownSlabSurface {
  const { sigma = 10, reach = 150 } = options;
  if (!(points?.depth instanceof Float64Array)) throw new RangeError('slabFromDepths: points must come from readSlabPoints or slabPoints.');
  if (points.size < 3) throw new RangeError(`slabFromDepths: a surface needs at least three depths; there are ${points.size}.`);
  for (const [name, value] of Object.entries({ sigma, reach })) {
    if (!(value > 0)) throw new RangeError(`slabFromDepths: ${name} must be a positive number of km, not ${String(value)}.`);
  }
  const plane = planeAbout(centreOf(points.longitude, points.latitude));
  const { x, y } = plane.project(points.longitude, points.latitude);
  const surface = new TriangulatedSurface(x, y, points.depth, reach);
  if (surface.triangleCount === 0)
    throw new RangeError('slabFromDepths: all points lie on one line, so there is no surface through them. Give at least two contours.');
  const at = (longitudes: ArrayLike<number>, latitudes: ArrayLike<number>) => below(surface, plane, { longitudes, latitudes, sigma, reach });
  const found = options.trench ?? shallowestLine(points);
  const trench = found === undefined ? undefined : orientedTrench(found, points, plane);
  const extent = extentOf(points.longitude, points.latitude, plane.centre.longitude);
  const depthRange = [points.depth.reduce((a, b) => Math.min(a, b), Infinity), points.depth.reduce((a, b) => Math.max(a, b), -Infinity)] as const;
  const notes = [...points.notes];
  if (trench === undefined)
    notes.push('No trench line: the shallowest depths are not a contour at 20 km or less. Give { trench } to have trench distances.');
  else if (options.trench === undefined) notes.push(`Distances are measured from the ${trench.name}, which lies landward of the trench.`);
  notes.push(`1σ of ${sigma} km for the published depths is ${options.sigma === undefined ? 'an assumption' : 'as given'}; the file carries none.`);
  const slab: SlabSurface = {
    kind: 'published depths',
    name: points.slab,
    ...(trench === undefined ? {} : { trench }),
    extent,
    depthRange,
    notes,
    lineage: [
      ...points.lineage,
      step(
        'slabFromDepths',
        { points: points.size, sigma, reach, line: trench?.name ?? null },
        {
          says:
            `A surface was laid through ${points.size} published slab depths${points.slab === '' ? '' : ` (${points.slab})`} on ` +
            `Delaunay triangles with slopes from local quadratic fits; their 1σ was taken as ${sigma} km.`,
        },
      ),
    ],
    depthAt: (longitudes, latitudes) => at(longitudes, latitudes).depth,
    at,
  };
  return showAs(slab, () => ({
    title: `Slab surface${slab.name === '' ? '' : ` "${slab.name}"`} from published depths`,
    columns: ['points', 'triangles', 'depths (km)', 'west', 'east', 'south', 'north', 'distances from'],
    rows: [
      [
        points.size,
        surface.triangleCount,
        `${depthRange[0]}–${depthRange[1]}`,
        extent.west,
        extent.east,
        extent.south,
        extent.north,
        trench?.name ?? '–',
      ],
    ],
    notes,
  }));
}

function below(
  surface: TriangulatedSurface,
  plane: Plane,
  at: { longitudes: ArrayLike<number>; latitudes: ArrayLike<number>; sigma: number; reach: number },
) {
  checkedPoints(at.longitudes, at.latitudes, 'slab.at');
  const result = emptyBelow(at.longitudes.length);
  const { x, y } = plane.project(at.longitudes, at.latitudes);
  const where: Located = { triangle: -1, a: 0, b: 0, c: 0 };
  const sloped: Sloped = { depth: 0, slopeX: 0, slopeY: 0, bulge: 0 };
  for (let i = 0; i < x.length; i++) {
    if (Number.isNaN(x[i]) || surface.locate(x[i], y[i], where).triangle === -1) continue;
    const gap = surface.longestEdge(where.triangle);
    if (gap > 2 * at.reach) continue;
    surface.evaluate(x[i], y[i], where, sloped);
    result.depth[i] = sloped.depth;
    result.sigma[i] = Math.hypot(at.sigma, sloped.bulge / 2);
    setAttitude(result, i, sloped, plane.local(at.longitudes[i], at.latitudes[i]));
    result.support[i] = gap > at.reach ? slabSupport.extrapolated : slabSupport.within;
  }
  return result;
}

/** @internal Dip and strike from a slope on the plane: conformal, so one scale factor and one direction of north. */
export function setAttitude(
  result: { readonly dip: Float64Array; readonly strike: Float64Array },
  i: number,
  slope: { readonly slopeX: number; readonly slopeY: number },
  local: { readonly scale: number; readonly north: number },
): void {
  result.dip[i] = (Math.atan(Math.hypot(slope.slopeX, slope.slopeY) * local.scale) * 180) / Math.PI;
  result.strike[i] = wrapAzimuth((Math.atan2(slope.slopeX, slope.slopeY) * 180) / Math.PI - local.north - 90);
}

/** @internal The line turned so that most of the slab's deeper data lie on its right: along-arc position then grows along strike. */
export function orientedTrench(
  line: TrenchLine,
  points: { longitude: Float64Array; latitude: Float64Array; depth: Float64Array },
  plane: Plane,
): TrenchLine {
  const every = Math.max(1, Math.floor(points.depth.length / 400));
  const some: number[] = [];
  for (let i = 0; i < points.depth.length; i += every) some.push(i);
  const { distance } = measureFromLine(
    line,
    some.map((i) => points.longitude[i]),
    some.map((i) => points.latitude[i]),
    plane,
  );
  let side = 0;
  for (const d of distance) side += Math.sign(d);
  return side < 0 ? reversedTrench(line) : line;
}

/** @internal Geographic frame of points, in one piece across the dateline. */
export function extentOf(longitudes: Float64Array, latitudes: Float64Array, centre: number): SlabSurface['extent'] {
  let [west, east, south, north] = [Infinity, -Infinity, Infinity, -Infinity];
  for (let i = 0; i < longitudes.length; i++) {
    const longitude = longitudeNear(longitudes[i], centre);
    west = Math.min(west, longitude);
    east = Math.max(east, longitude);
    south = Math.min(south, latitudes[i]);
    north = Math.max(north, latitudes[i]);
  }
  return { west, south, east, north };
}
