import type { Showable } from '../display';
import type { Step } from '../suite';
import type { TrenchLine } from './trench';

/** How far a depth is supported: 0 within the data · 1 extrapolated, or across a gap in the data · 2 no depth. */
export const slabSupport = { within: 0, extrapolated: 1, none: 2 } as const;

/** Names of the kinds of support, by number, for reports and labels. */
export const slabSupportNames = ['within data', 'extrapolated', 'no slab'] as const;

/** The slab below n points. NaN in every array where the support is `none`. */
export interface SlabBelow {
  /** km below the surface. */
  readonly depth: Float64Array;
  /** 1σ of depth, km. */
  readonly sigma: Float64Array;
  /** Degrees from the horizontal. */
  readonly dip: Float64Array;
  /** Azimuth in degrees (0–360) with the slab dipping to its right. */
  readonly strike: Float64Array;
  /** One number of `slabSupport` a point. */
  readonly support: Uint8Array;
}

/** The surface of one slab, from published depths or fitted to hypocentres. */
export interface SlabSurface {
  readonly kind: 'published depths' | 'hypocentres';
  readonly name: string;
  /** The line that distances are measured from, where one is known: oriented so that the slab dips to its right. */
  readonly trench?: TrenchLine;
  /** Geographic frame of the data: `west` ≤ `east`, and `east` may pass 180 when the slab lies across the dateline. */
  readonly extent: { readonly west: number; readonly south: number; readonly east: number; readonly north: number };
  readonly depthRange: readonly [number, number];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
  /**
   * Slab depth in km below each point (NaN where there is none).
   *
   * @param longitudes degrees east (n)
   * @param latitudes degrees north (n)
   */
  depthAt(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): Float64Array;
  /** Depth, 1σ, dip, strike and support below each point. */
  at(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): SlabBelow;
}

/** A slab surface that shows itself. */
export type ShownSlabSurface = SlabSurface & Showable;

/** @internal Empty columns for n points, all NaN and unsupported. */
export function emptyBelow(size: number): SlabBelow {
  const blank = () => new Float64Array(size).fill(NaN);
  return { depth: blank(), sigma: blank(), dip: blank(), strike: blank(), support: new Uint8Array(size).fill(slabSupport.none) };
}
