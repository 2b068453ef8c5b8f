import { writeWhole } from '../display';
import type { Step } from '../suite';
import { shortSource } from '../tables';
import { checkSave, type SavedScreen } from './export-csv';
import { exportTable, type FertilityRows } from './export-columns';
import type { FertilityScreen } from './screen';

/** Longitude, latitude, in degrees on WGS 84. */
export type GeoPosition = readonly [number, number];

/** One group or sample as a GeoJSON feature; its geometry is null where no coordinates are known. */
export interface FertilityFeature {
  readonly type: 'Feature';
  readonly id: string;
  readonly geometry:
    | { readonly type: 'Point'; readonly coordinates: GeoPosition }
    | { readonly type: 'MultiPoint'; readonly coordinates: readonly GeoPosition[] }
    | null;
  readonly properties: Readonly<Record<string, string | number | boolean | null>>;
}

/** A screening as GeoJSON (RFC 7946), with the cautions, sources and lineage as foreign members. */
export interface FertilityGeoJson {
  readonly type: 'FeatureCollection';
  readonly bbox?: readonly [number, number, number, number];
  readonly cautions: readonly string[];
  /** The steps that made the screening. */
  readonly lineage: readonly Step[];
  readonly sources: readonly string[];
  readonly features: readonly FertilityFeature[];
}

/**
 * A screening as GeoJSON (RFC 7946): one feature a group (its samples as a MultiPoint) or one a sample (a Point), the evidence as flat
 * attributes, so that any GIS can colour by verdict. Positions are WGS 84, longitude first; the columns `latitude` and `longitude` are
 * taken as such. A feature without usable coordinates has no geometry.
 *
 * @param screen what `screenFertility` returned
 * @param options `rows`: `groups` (default) or `samples`
 * @returns a plain object; `JSON.stringify` writes it
 * @throws RangeError for an unknown option
 * @source RFC 7946
 * @example fertilityGeoJson(screen).features[0].properties.verdict
 */
export function fertilityGeoJson(screen: FertilityScreen, options: { readonly rows?: FertilityRows } = {}): FertilityGeoJson {
  const { rows = 'groups' } = options;
  if (rows !== 'groups' && rows !== 'samples') throw new RangeError(`fertilityGeoJson: rows must be "groups" or "samples", not "${String(rows)}".`);
  const table = exportTable(screen, rows);
  const position = positionReader(screen);
  const box = new Bounds();
  const pointsOf = rows === 'groups' ? pointsByGroup(screen, position) : undefined;
  const features: FertilityFeature[] = [];
  for (let row = 0; row < table.rows; row++) {
    const properties: Record<string, string | number | boolean | null> = {};
    for (const { head, at } of table.columns) properties[head] = at(row) ?? null;
    let geometry: FertilityFeature['geometry'] = null;
    if (pointsOf === undefined) {
      const point = position(row);
      if (point !== undefined) {
        geometry = { type: 'Point', coordinates: point };
        box.take(point);
      }
    } else {
      const points = pointsOf.get(screen.groups[row].group) ?? [];
      if (points.length > 0) geometry = { type: 'MultiPoint', coordinates: points };
      for (const point of points) box.take(point);
    }
    features.push({ type: 'Feature', id: `${rows === 'groups' ? 'group' : 'sample'}-${row + 1}`, geometry, properties });
  }
  const bbox = box.asBbox();
  return {
    type: 'FeatureCollection',
    ...(bbox === undefined ? {} : { bbox }),
    cautions: screen.cautions,
    sources: screen.sources.map(shortSource),
    lineage: screen.lineage,
    features,
  };
}

/**
 * Writes a screening as a GeoJSON file; see `fertilityGeoJson`. The file is written whole or not at all.
 *
 * @param path file name ending in .geojson
 * @returns the path and the number of features
 * @throws RangeError for another ending or an unknown option; the system's own error when the file cannot be written
 * @example saveFertilityGeoJson(screen, 'screening.geojson')
 */
export function saveFertilityGeoJson(screen: FertilityScreen, path: string, options: { readonly rows?: FertilityRows } = {}): SavedScreen {
  checkSave('saveFertilityGeoJson', path, '.geojson', options.rows ?? 'groups');
  const collection = fertilityGeoJson(screen, options);
  const { features, ...head } = collection;
  // One feature a line: files that can be compared line by line.
  const opening = JSON.stringify(head).slice(0, -1);
  writeWhole(path, `${opening},"features":[\n${features.map((feature) => JSON.stringify(feature)).join(',\n')}\n]}\n`);
  return { path, rows: features.length };
}

/** Longitude and latitude of a row, rounded to 0.1 m, or undefined where they are unknown or no place on earth. */
function positionReader(screen: FertilityScreen): (row: number) => GeoPosition | undefined {
  const latitude = screen.suite.columns.get('latitude')?.values;
  const longitude = screen.suite.columns.get('longitude')?.values;
  if (latitude === undefined || longitude === undefined) return () => undefined;
  return (row) => {
    const north = latitude[row];
    let east = longitude[row];
    if (!(Math.abs(north) <= 90) || !(east >= -180 && east <= 360)) return undefined;
    if (east > 180) east -= 360;
    return [Math.round(east * 1e6) / 1e6, Math.round(north * 1e6) / 1e6];
  };
}

function pointsByGroup(screen: FertilityScreen, position: (row: number) => GeoPosition | undefined): ReadonlyMap<string, readonly GeoPosition[]> {
  const points = new Map<string, GeoPosition[]>();
  const texts = screen.suite.label(screen.label);
  for (let row = 0; row < texts.length; row++) {
    const point = texts[row] === '' ? undefined : position(row);
    if (point === undefined) continue;
    const own = points.get(texts[row]);
    if (own === undefined) points.set(texts[row], [point]);
    else own.push(point);
  }
  return points;
}

/** West, south, east, north of the points; over the 180° meridian west is larger than east, as RFC 7946 (5.2) has it. */
class Bounds {
  private south = Infinity;
  private north = -Infinity;
  private readonly plain = { low: Infinity, high: -Infinity };
  private readonly turned = { low: Infinity, high: -Infinity };

  take([east, north]: GeoPosition): void {
    this.south = Math.min(this.south, north);
    this.north = Math.max(this.north, north);
    const turned = east < 0 ? east + 360 : east;
    this.plain.low = Math.min(this.plain.low, east);
    this.plain.high = Math.max(this.plain.high, east);
    this.turned.low = Math.min(this.turned.low, turned);
    this.turned.high = Math.max(this.turned.high, turned);
  }

  asBbox(): readonly [number, number, number, number] | undefined {
    if (this.north === -Infinity) return undefined;
    const crosses = this.turned.high - this.turned.low < this.plain.high - this.plain.low;
    if (!crosses) return [this.plain.low, this.south, this.plain.high, this.north];
    const back = (east: number) => Math.round((east > 180 ? east - 360 : east) * 1e6) / 1e6;
    return [back(this.turned.low), this.south, back(this.turned.high), this.north];
  }
}
