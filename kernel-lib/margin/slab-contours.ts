import { contours } from 'd3-contour';
import { slabSupport, type SlabSurface } from './slab';

/** One depth contour of a slab, in pieces. */
export interface SlabContour {
  readonly depth: number;
  /** Each piece: longitudes and latitudes in order, and whether its depth is extrapolated there. Longitudes run on past 180 across the dateline. */
  readonly pieces: readonly { readonly longitude: readonly number[]; readonly latitude: readonly number[]; readonly extrapolated: boolean }[];
}

/**
 * Depth contours of a slab surface, traced on a grid of longitude and latitude.
 *
 * @param slab a slab surface
 * @param depths km
 * @param options `frame`: the region (default: the slab's extent); `cells`: grid cells along its longer side (default 140)
 * @throws RangeError for depths that are not numbers, or a frame without area
 * @example slabContours(slab, [50, 100, 150, 200])
 */
export function slabContours(
  slab: SlabSurface,
  depths: readonly number[],
  options: { readonly frame?: SlabSurface['extent']; readonly cells?: number } = {},
): readonly SlabContour[] {
  const { frame = slab.extent, cells = 140 } = options;
  if (!Array.isArray(depths) || !depths.every(Number.isFinite)) throw new RangeError('slabContours: depths must be a list of numbers, in km.');
  if (!(frame.east > frame.west && frame.north > frame.south))
    throw new RangeError('slabContours: the frame needs west < east and south < north (east may pass 180).');
  if (!(cells >= 10 && cells <= 2000)) throw new RangeError(`slabContours: cells must be 10 to 2000, not ${String(cells)}.`);
  const wide = frame.east - frame.west;
  const high = frame.north - frame.south;
  const columns = Math.max(10, Math.round(wide >= high ? cells : (cells * wide) / high));
  const rows = Math.max(10, Math.round(high >= wide ? cells : (cells * high) / wide));
  const longitude = (i: number) => frame.west + (wide * i) / (columns - 1);
  const latitude = (j: number) => frame.south + (high * j) / (rows - 1);
  const lons = new Float64Array(columns * rows);
  const lats = new Float64Array(columns * rows);
  for (let j = 0, n = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++, n++) {
      lons[n] = turn(longitude(i));
      lats[n] = latitude(j);
    }
  }
  const { depth, support } = slab.at(lons, lats);
  const traced = contours().size([columns, rows]).smooth(true);
  return [...depths]
    .sort((a, b) => a - b)
    .map((level) => {
      const pieces: { longitude: number[]; latitude: number[]; extrapolated: boolean }[] = [];
      for (const polygon of traced.contour(Array.from(depth), level).coordinates) {
        for (const ring of polygon) {
          let open: { longitude: number[]; latitude: number[]; extrapolated: boolean } | undefined;
          for (const [gx, gy] of ring) {
            const cell = crossing(gx - 0.5, gy - 0.5, level, { columns, rows, depth, support });
            if (cell === undefined) {
              open = undefined;
              continue;
            }
            const at = { longitude: longitude(gx - 0.5), latitude: latitude(gy - 0.5) };
            if (open === undefined || open.extrapolated !== cell.extrapolated) {
              // A piece of the other kind begins where the last one ended, so that no gap is drawn.
              const last: typeof open = open;
              open = { longitude: [], latitude: [], extrapolated: cell.extrapolated };
              if (last !== undefined) {
                open.longitude.push(last.longitude[last.longitude.length - 1]);
                open.latitude.push(last.latitude[last.latitude.length - 1]);
              }
              pieces.push(open);
            }
            open.longitude.push(at.longitude);
            open.latitude.push(at.latitude);
          }
        }
      }
      return { depth: level, pieces: pieces.filter((piece) => piece.longitude.length > 1) };
    });
}

const turn = (longitude: number): number => (longitude > 360 ? longitude - 360 : longitude);

/**
 * What lies at a place where a traced ring crosses an edge of the grid: undefined on the rim of the grid or of the slab, where the ring only
 * closes itself and is no contour.
 */
function crossing(
  x: number,
  y: number,
  level: number,
  grid: { readonly columns: number; readonly rows: number; readonly depth: Float64Array; readonly support: Uint8Array },
): { extrapolated: boolean } | undefined {
  const { columns, rows, depth, support } = grid;
  const left = Math.floor(x + 1e-9);
  const low = Math.floor(y + 1e-9);
  const right = Math.ceil(x - 1e-9);
  const high = Math.ceil(y - 1e-9);
  if (left < 0 || low < 0 || right > columns - 1 || high > rows - 1) return undefined;
  const a = low * columns + left;
  const b = high * columns + right;
  if (Number.isNaN(depth[a]) || Number.isNaN(depth[b])) return undefined;
  // On the slab's rim the tracer puts the ring on the last point that has a depth.
  if (a === b && Math.abs(depth[a] - level) > 1e-6) return undefined;
  return { extrapolated: support[a] === slabSupport.extrapolated || support[b] === slabSupport.extrapolated };
}
