import { showAs, type Showable } from '../display';
import { step, type Step } from '../suite';
import { checkedPoints, PointTableError, readPointTable, wantedDepth, wantedLatitude, wantedLongitude } from './table-input';

/** Published depths of one slab: points of its depth contours, or of a grid. */
export interface SlabPoints {
  readonly longitude: Float64Array;
  readonly latitude: Float64Array;
  /** km below the surface, positive downwards. */
  readonly depth: Float64Array;
  /** Which piece of a contour each point belongs to; points of a piece are in order. Absent for a grid. */
  readonly piece?: readonly string[];
  /** The slab's name in the file ('' where the file holds one slab without a name). */
  readonly slab: string;
  readonly size: number;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/**
 * Published slab depths from arrays.
 *
 * @param points `longitude`, `latitude` (degrees, n), `depth` (km, n; all positive or all negative downwards), `slab`: a name
 * @throws RangeError for unequal lengths or positions outside the globe
 * @example slabPoints({ longitude: [-129, -130, -129], latitude: [-44, -44, -45], depth: [60, 140, 60] })
 */
export function slabPoints(points: {
  readonly longitude: ArrayLike<number>;
  readonly latitude: ArrayLike<number>;
  readonly depth: ArrayLike<number>;
  readonly slab?: string;
}): SlabPoints & Showable {
  checkedPoints(points?.longitude, points?.latitude, 'slabPoints');
  if (points.depth?.length !== points.longitude.length)
    throw new RangeError(`slabPoints: ${points.depth?.length ?? 'no'} depths for ${points.longitude.length} points; give one a point, in km.`);
  const rows = Array.from({ length: points.longitude.length }, (_, i) => i);
  return gather(points.longitude, points.latitude, points.depth, rows, { slab: points.slab ?? '' }, step('slabPoints', { points: rows.length }));
}

/**
 * Reads published slab depths: a CSV of depth contours or of a grid, with longitude, latitude and depth (km; negative downwards is
 * recognised). A column `slab` names several slabs in one file, a column `segment` the pieces of the contours.
 *
 * @param path CSV file
 * @param options `slab`: which slab of the file; needed when it holds several, because one surface cannot join two slabs
 * @returns the points of one slab
 * @throws PointTableError naming file, line and column; RangeError for an unknown slab, listing those there are
 * @example const points = await readSlabPoints('data/slab-depths.csv', { slab: 'kur' })
 */
export async function readSlabPoints(path: string, options: { readonly slab?: string } = {}): Promise<SlabPoints & Showable> {
  const table = await readPointTable(
    path,
    [
      wantedLongitude,
      wantedLatitude,
      wantedDepth,
      { name: 'slab', spellings: ['slab', 'slabname'], required: false, text: true },
      { name: 'segment', spellings: ['segment', 'piece', 'line', 'lineid'], required: false, text: true },
    ],
    'readSlabPoints',
  );
  const names = table.texts.slab;
  const known = [...new Set(names ?? [])];
  if (options.slab === undefined && known.length > 1) {
    throw new RangeError(
      `readSlabPoints: ${table.file} holds ${known.length} slabs (${known.join(', ')}). Choose one with { slab: '${known[0]}' }: one ` +
        'surface cannot join two slabs.',
    );
  }
  if (options.slab !== undefined && !known.includes(options.slab)) {
    throw new RangeError(`readSlabPoints: ${table.file} has no slab "${options.slab}". It has: ${known.join(', ') || 'no column that names slabs'}.`);
  }
  const slab = options.slab ?? known[0] ?? '';
  const rows: number[] = [];
  for (let i = 0; i < table.size; i++) if (names === undefined || names[i] === slab) rows.push(i);
  const { longitude, latitude, depth } = table.numbers;
  const points = gather(
    longitude!,
    latitude!,
    depth!,
    rows,
    { slab, segments: table.texts.segment },
    step('readSlabPoints', { file: table.file, sha256: table.sha256, slab, rows: rows.length }),
  );
  if (points.size === 0) throw new PointTableError(`${table.file}: no row has longitude, latitude and depth.`);
  return points;
}

function gather(
  longitude: ArrayLike<number>,
  latitude: ArrayLike<number>,
  depth: ArrayLike<number>,
  rows: readonly number[],
  about: { readonly slab: string; readonly segments?: readonly string[] },
  because: Step,
): SlabPoints & Showable {
  const kept = rows.filter((i) => Number.isFinite(longitude[i]) && Number.isFinite(latitude[i]) && Number.isFinite(depth[i]));
  const below = kept.filter((i) => depth[i] < 0).length;
  const notes: string[] = [];
  if (kept.length < rows.length) notes.push(`${rows.length - kept.length} of ${rows.length} points have no depth or position and are left out.`);
  // Grids of elevation give depth as a negative number. A few points above the surface in a positive file are the land side of a trench.
  const sign = below > kept.length / 2 ? -1 : 1;
  if (sign < 0) notes.push('Depths are negative in the file and were taken as km below the surface.');
  const points: SlabPoints = {
    longitude: Float64Array.from(kept, (i) => longitude[i]),
    latitude: Float64Array.from(kept, (i) => latitude[i]),
    depth: Float64Array.from(kept, (i) => sign * depth[i]),
    ...(about.segments === undefined ? {} : { piece: kept.map((i) => about.segments![i]) }),
    slab: about.slab,
    size: kept.length,
    notes,
    lineage: [because],
  };
  return showAs(points, () => {
    let shallow = Infinity;
    let deep = -Infinity;
    for (const z of points.depth) {
      shallow = Math.min(shallow, z);
      deep = Math.max(deep, z);
    }
    return {
      title: `Slab depths${points.slab === '' ? '' : ` (${points.slab})`}`,
      columns: ['points', 'shallowest (km)', 'deepest (km)'],
      rows: [[points.size, shallow, deep]],
      notes,
    };
  });
}
