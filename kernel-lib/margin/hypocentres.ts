import { showAs, type Showable } from '../display';
import { step, type Step } from '../suite';
import { checkedPoints, PointTableError, readPointTable, wantedDepth, wantedLatitude, wantedLongitude } from './table-input';

/** Located earthquakes: one entry an event in every array. */
export interface Hypocentres {
  readonly longitude: Float64Array;
  readonly latitude: Float64Array;
  /** km below the surface. */
  readonly depth: Float64Array;
  /** Catalogue's 1σ of depth in km, where the table has it (NaN elsewhere). */
  readonly depthError?: Float64Array;
  readonly magnitude?: Float64Array;
  readonly size: number;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/**
 * Hypocentres from arrays.
 *
 * @param events `longitude`, `latitude` (degrees, n), `depth` (km, n), optional `depthError` (km, n), `magnitude` (n)
 * @throws RangeError for unequal lengths or positions outside the globe
 * @example hypocentresOf({ longitude: [-129.5, -130.1], latitude: [-44.2, -44.3], depth: [82, 131] })
 */
export function hypocentresOf(events: {
  readonly longitude: ArrayLike<number>;
  readonly latitude: ArrayLike<number>;
  readonly depth: ArrayLike<number>;
  readonly depthError?: ArrayLike<number>;
  readonly magnitude?: ArrayLike<number>;
}): Hypocentres & Showable {
  checkedPoints(events?.longitude, events?.latitude, 'hypocentresOf');
  for (const name of ['depth', 'depthError', 'magnitude'] as const) {
    const list = events[name];
    if (list === undefined ? name === 'depth' : list.length !== events.longitude.length) {
      throw new RangeError(`hypocentresOf: ${list?.length ?? 'no'} values of ${name} for ${events.longitude.length} events; give one an event.`);
    }
  }
  return gather(events, step('hypocentresOf', { events: events.longitude.length }), []);
}

/** Event types of the standard catalogues that are not earthquakes are recognised by this word's absence. */
const isEarthquake = (type: string): boolean => type === '' || /earthquake|^eq$|^ke$|^se$/i.test(type);

/**
 * Reads a hypocentre table: any CSV with latitude, longitude and depth (km). Columns of the USGS ComCat export (`mag`, `type`,
 * `depthError`, `time`) are recognised; rows whose `type` is not an earthquake are left out and counted.
 *
 * Nothing made from hypocentres here forecasts earthquakes or eruptions.
 *
 * @param path CSV file
 * @throws PointTableError naming file, line and column
 * @example const quakes = await readHypocentres('data/oruvai-hypocentres.csv')
 */
export async function readHypocentres(path: string): Promise<Hypocentres & Showable> {
  const table = await readPointTable(
    path,
    [
      wantedLongitude,
      wantedLatitude,
      wantedDepth,
      {
        name: 'depthError',
        spellings: ['deptherror', 'depthuncertainty', 'depthsigma', 'sigmadepth', 'errz', 'erz'],
        required: false,
        range: [0, 1000],
      },
      { name: 'magnitude', spellings: ['mag', 'magnitude', 'mw', 'ml', 'mb'], required: false },
      { name: 'type', spellings: ['type', 'eventtype'], required: false, text: true },
    ],
    'readHypocentres',
  );
  if (table.size === 0) throw new PointTableError(`${table.file}: the table has heads but no rows.`);
  const types = table.texts.type;
  const rows: number[] = [];
  for (let i = 0; i < table.size; i++) if (types === undefined || isEarthquake(types[i])) rows.push(i);
  const pick = (list: Float64Array | undefined) => (list === undefined ? undefined : Float64Array.from(rows, (i) => list[i]));
  const notes =
    rows.length < table.size ? [`${table.size - rows.length} rows are not earthquakes by their type (blasts, explosions …) and are left out.`] : [];
  const { longitude, latitude, depth, depthError, magnitude } = table.numbers;
  const events = {
    longitude: pick(longitude)!,
    latitude: pick(latitude)!,
    depth: pick(depth)!,
    depthError: pick(depthError),
    magnitude: pick(magnitude),
  };
  return gather(events, step('readHypocentres', { file: table.file, sha256: table.sha256, rows: table.size, earthquakes: rows.length }), notes);
}

function gather(events: Parameters<typeof hypocentresOf>[0], because: Step, before: readonly string[]): Hypocentres & Showable {
  const { longitude, latitude, depth, depthError, magnitude } = events;
  const kept: number[] = [];
  for (let i = 0; i < longitude.length; i++)
    if (Number.isFinite(longitude[i]) && Number.isFinite(latitude[i]) && Number.isFinite(depth[i])) kept.push(i);
  const notes = [...before];
  if (kept.length < longitude.length) notes.push(`${longitude.length - kept.length} events have no position or depth and are left out.`);
  const pick = (list: ArrayLike<number>) => Float64Array.from(kept, (i) => list[i]);
  const result: Hypocentres = {
    longitude: pick(longitude),
    latitude: pick(latitude),
    depth: pick(depth),
    ...(depthError === undefined ? {} : { depthError: pick(depthError) }),
    ...(magnitude === undefined ? {} : { magnitude: pick(magnitude) }),
    size: kept.length,
    notes,
    lineage: [because],
  };
  return showAs(result, () => {
    const sorted = result.depth.slice().sort();
    const at = (share: number) => (sorted.length === 0 ? NaN : sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))]);
    return {
      title: 'Hypocentres',
      columns: ['events', 'median depth (km)', '95 % shallower than (km)', 'deepest (km)'],
      rows: [[result.size, at(0.5), at(0.95), at(1)]],
      notes,
    };
  });
}
