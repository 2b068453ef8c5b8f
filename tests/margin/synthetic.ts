import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { pointAt } from '../../kernel-lib/margin/geodesy';

/** A slab of known shape below a straight trench that strikes north at the given longitude and dips west. */
export interface KnownSlab {
  readonly trenchLongitude: number;
  readonly centreLatitude: number;
  /** Depth (km) at a distance from the trench (km) and along it (km). */
  readonly depth: (distance: number, along: number) => number;
}

/** Steepening with depth and waving along strike: about 100 km deep at 190 km from the trench. */
export const wavySlab: KnownSlab = {
  trenchLongitude: -128,
  centreLatitude: -44.5,
  depth: (distance, along) => 7 + 0.12 * distance + 0.0019 * distance ** 2 + 8 * Math.sin(along / 120) * (distance / 200),
};

export function random(seed: number): { uniform: () => number; normal: () => number } {
  const generator = xoroshiro128plus(seed);
  const uniform = () => uniformFloat64(generator);
  return { uniform, normal: () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform()) };
}

/** The place so many km along the trench (north positive) and west of it. */
export function place(slab: KnownSlab, distance: number, along: number): { longitude: number; latitude: number } {
  const foot = pointAt(slab.trenchLongitude, slab.centreLatitude, along >= 0 ? 0 : 180, Math.abs(along));
  return pointAt(foot.longitude, foot.latitude, 270, distance);
}

export interface SyntheticOptions {
  readonly seed: number;
  readonly count: number;
  /** Share of events in the crust of the upper plate, 3–30 km deep anywhere. */
  readonly crust: number;
  /** 1σ of location depth, km. */
  readonly noise: number;
  /** Share of the slab's events that lie on a lower plane this many km below the upper, across the slab. */
  readonly lower?: { readonly share: number; readonly separation: number };
}

export function syntheticEvents(slab: KnownSlab, { seed, count, crust, noise, lower }: SyntheticOptions) {
  const { uniform, normal } = random(seed);
  const events = { longitude: [] as number[], latitude: [] as number[], depth: [] as number[] };
  while (events.depth.length < count) {
    const along = (uniform() - 0.5) * 500;
    let distance = 30 + 290 * uniform();
    let depth: number;
    if (uniform() < crust) depth = 3 + 27 * uniform();
    else {
      depth = slab.depth(distance, along);
      if (lower !== undefined && uniform() < lower.share) {
        const slope = (slab.depth(distance + 1, along) - slab.depth(distance - 1, along)) / 2;
        const tilt = Math.atan(slope);
        distance -= lower.separation * Math.sin(tilt);
        depth += lower.separation * Math.cos(tilt);
      }
      depth += noise * normal();
    }
    if (depth < 1) continue;
    const at = place(slab, distance, along);
    events.longitude.push(at.longitude);
    events.latitude.push(at.latitude);
    events.depth.push(depth);
  }
  return events;
}
