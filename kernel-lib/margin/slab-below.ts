import { showAs, type Showable } from '../display';
import { column, derivedColumn, joinLineages, step, Suite, suiteOf, type Column, type Step } from '../suite';
import { wrapLongitude } from './geodesy';
import { emptyBelow, slabSupport, slabSupportNames, type SlabBelow, type SlabSurface } from './slab';
import { checkedPoints } from './table-input';
import { measureFromLine, type TrenchLine } from './trench';

/** The slab below points, with distances along the surface. */
export interface SlabBelowPoints extends SlabBelow {
  /** km from the trench line to each point, positive on the side that the slab dips to; NaN without a line. */
  readonly trenchDistance: Float64Array;
  /** km along the line, growing along strike, from the line's first point; NaN without a line. */
  readonly arcPosition: Float64Array;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** Symbols of the columns that `slabBelow` joins to a suite. */
export const slabColumns = ['SlabDepth', 'SlabDip', 'SlabStrike', 'TrenchDistance', 'ArcPosition'] as const;

/**
 * The slab below each sample: joined to a suite as columns, or for bare points as arrays.
 *
 * A suite needs the columns `latitude` and `longitude` (degrees). It gets `SlabDepth` (km, with its 1σ), `SlabDip` (°), `SlabStrike` (°, the slab
 * dips to its right), `TrenchDistance` and `ArcPosition` (km along the line), and the label `slabSupport`: `within data`, `extrapolated` or
 * `no slab`. Samples without a position, or with no slab below, have missing cells. Distances are geodesics on the WGS84 ellipsoid.
 *
 * @param slab from `slabFromDepths` or `slabFromHypocentres`
 * @param target a suite of n samples, or `{ longitude, latitude }` (degrees, n each)
 * @param options `trench`: a line to measure from in place of the slab's own
 * @returns the suite with the columns, or the arrays
 * @throws RangeError for a suite without coordinates, or positions outside the globe
 * @source Karney 2013 (geodesics); Snyder 1987 (stereographic projection)
 * @example const placed = slabBelow(slab, suite); placed.values('SlabDepth')
 */
export function slabBelow(slab: SlabSurface, target: Suite, options?: { readonly trench?: TrenchLine }): Suite;
export function slabBelow(
  slab: SlabSurface,
  target: { readonly longitude: ArrayLike<number>; readonly latitude: ArrayLike<number> },
  options?: { readonly trench?: TrenchLine },
): SlabBelowPoints & Showable;
export function slabBelow(
  slab: SlabSurface,
  target: Suite | { readonly longitude: ArrayLike<number>; readonly latitude: ArrayLike<number> },
  options: { readonly trench?: TrenchLine } = {},
): Suite | (SlabBelowPoints & Showable) {
  if (typeof slab?.at !== 'function')
    throw new RangeError('slabBelow: the first argument must be a slab surface, from slabFromDepths or slabFromHypocentres.');
  if (target instanceof Suite) return joinToSuite(slab, target, options);
  checkedPoints(target?.longitude, target?.latitude, 'slabBelow');
  const below = slab.at(target.longitude, target.latitude);
  const { trenchDistance, arcPosition, notes } = measured(slab, target.longitude, target.latitude, options.trench);
  const counts = supportCounts(below.support);
  const result: SlabBelowPoints = {
    ...below,
    trenchDistance,
    arcPosition,
    notes,
    lineage: [
      ...slab.lineage,
      step(
        'slabBelow',
        { points: below.depth.length, ...counts, line: (options.trench ?? slab.trench)?.name ?? null },
        { sources: ['karney_2013', 'snyder_1987'] },
      ),
    ],
  };
  return showAs(result, () => ({
    title: 'Slab below points',
    columns: ['longitude', 'latitude', 'slab depth (km)', '1σ (km)', 'dip (°)', 'strike (°)', 'trench distance (km)', 'along arc (km)', 'support'],
    rows: Array.from({ length: Math.min(60, below.depth.length) }, (_, i) => [
      target.longitude[i],
      target.latitude[i],
      round(below.depth[i], 1),
      round(below.sigma[i], 1),
      round(below.dip[i], 1),
      round(below.strike[i], 0),
      round(trenchDistance[i], 1),
      round(arcPosition[i], 1),
      slabSupportNames[below.support[i]],
    ]),
    totalRows: below.depth.length,
    notes,
  }));
}

/** @internal Number to so many decimals, for tables. */
export function round(value: number, decimals: number): number {
  return Number.isFinite(value) ? Number(value.toFixed(decimals)) : NaN;
}

function supportCounts(support: Uint8Array): { withinData: number; extrapolated: number; noSlab: number } {
  const counts = { withinData: 0, extrapolated: 0, noSlab: 0 };
  for (const each of support) counts[each === slabSupport.within ? 'withinData' : each === slabSupport.extrapolated ? 'extrapolated' : 'noSlab']++;
  return counts;
}

function measured(slab: SlabSurface, longitude: ArrayLike<number>, latitude: ArrayLike<number>, given: TrenchLine | undefined) {
  const line = given ?? slab.trench;
  const notes = [...slab.notes];
  if (line === undefined) {
    const blank = new Float64Array(longitude.length).fill(NaN);
    return {
      trenchDistance: blank,
      arcPosition: blank.slice(),
      notes: [...notes, 'Trench distances need a line: give { trench } (see readTrench).'],
    };
  }
  const { distance, along, beyondEnd } = measureFromLine(line, longitude, latitude);
  // A line given here may run either way; the slab's own is already turned so that the slab dips to its right.
  if (given !== undefined) {
    let side = 0;
    for (const d of distance) if (Number.isFinite(d)) side += Math.sign(d);
    if (side < 0) for (let i = 0; i < distance.length; i++) distance[i] = -distance[i];
  }
  let beyond = 0;
  for (const end of beyondEnd) beyond += end;
  if (beyond > 0) notes.push(`${beyond} points lie beyond an end of the ${line.name}: their distance is to its end.`);
  return { trenchDistance: distance, arcPosition: along, notes };
}

function joinToSuite(slab: SlabSurface, suite: Suite, options: { readonly trench?: TrenchLine }): Suite {
  const { longitude, latitude } = coordinatesOf(suite, 'slabBelow');
  const size = suite.size;
  // A bad coordinate of one sample is that sample's missing cell, never the end of the run.
  const lon = longitude.slice();
  const lat = latitude.slice();
  let outside = 0;
  for (let i = 0; i < size; i++) {
    if (Math.abs(lat[i]) <= 90 && Math.abs(lon[i]) <= 360) continue;
    if (Number.isFinite(lat[i]) && Number.isFinite(lon[i])) outside++;
    lat[i] = NaN;
    lon[i] = NaN;
  }
  const below = size === 0 ? emptyBelow(0) : slab.at(lon, lat);
  const { trenchDistance, arcPosition, notes } = measured(slab, lon, lat, options.trench);
  const columns: Column[] = [
    derivedColumn('SlabDepth', below.depth, 'km', below.sigma),
    derivedColumn('SlabDip', below.dip, '°'),
    derivedColumn('SlabStrike', below.strike, '°'),
    derivedColumn('TrenchDistance', trenchDistance, 'km'),
    derivedColumn('ArcPosition', arcPosition, 'km'),
  ];
  const detail = {
    slab: slab.name,
    kind: slab.kind,
    samples: size,
    ...supportCounts(below.support),
    withoutPosition: lon.reduce((n, value) => n + (Number.isNaN(value) ? 1 : 0), 0),
    outsideTheGlobe: outside,
    line: (options.trench ?? slab.trench)?.name ?? null,
    notes,
  };
  const all = new Map(suite.columns);
  for (const each of columns) all.set(each.symbol, each);
  const labels = new Map(suite.labels).set(
    'slabSupport',
    Array.from(below.support, (support) => slabSupportNames[support]),
  );
  const because = step('slabBelow', detail, {
    sources: ['karney_2013', 'snyder_1987'],
    says:
      'Slab depth, dip and strike were read below each ' +
      `sample${detail.line === null ? '' : `, and distances taken as geodesics on the WGS84 ellipsoid from the ${detail.line}`}.`,
  });
  return suiteOf({ columns: all.values(), labels, lineage: [...joinLineages(suite.lineage, slab.lineage), because] });
}

/** @internal Longitude and latitude of a suite (degrees, n each). */
export function coordinatesOf(suite: Suite, what: string): { readonly longitude: Float64Array; readonly latitude: Float64Array } {
  const find = (names: readonly string[]) => names.map((name) => suite.columns.get(name)).find((each) => each !== undefined);
  const longitude = find(['longitude', 'Longitude', 'lon']);
  const latitude = find(['latitude', 'Latitude', 'lat']);
  if (longitude === undefined || latitude === undefined) {
    throw new RangeError(
      `${what}: the suite has no columns "latitude" and "longitude" (degrees). It has: ${suite.analytes.join(', ')}. Add them with ` +
        'withCoordinates(suite, …).',
    );
  }
  return { longitude: longitude.values, latitude: latitude.values };
}

/**
 * Gives samples the position of their volcano.
 *
 * @param suite n samples
 * @param places by group name: `[longitude, latitude]` in degrees
 * @param options `by`: the label that names the group (default `volcano`)
 * @returns the suite with the columns `longitude` and `latitude`; samples of a group that is not listed keep what they had, or have none
 * @throws RangeError for an unknown label, or places outside the globe
 * @example withCoordinates(suite, { Ketu: [-129.62, -44.12] })
 */
export function withCoordinates(
  suite: Suite,
  places: Readonly<Record<string, readonly [number, number]>>,
  options: { readonly by?: string } = {},
): Suite {
  const { by = 'volcano' } = options;
  const names = suite.label(by);
  const entries = Object.entries(places);
  checkedPoints(
    entries.map(([, place]) => place[0]),
    entries.map(([, place]) => place[1]),
    'withCoordinates',
  );
  const unit = '°';
  const before = (symbol: string) => suite.columns.get(symbol)?.values;
  const fill = (symbol: string, at: 0 | 1) =>
    column({
      symbol,
      unit,
      values: names.map((name, i) =>
        Object.hasOwn(places, name) ? (at === 0 ? wrapLongitude(places[name][0]) : places[name][1]) : (before(symbol)?.[i] ?? NaN),
      ),
    });
  return suite.with([fill('longitude', 0), fill('latitude', 1)], step('withCoordinates', { by, places: entries.map(([name]) => name) }));
}
