import KDBush from 'kdbush';
import { showAs, type Showable } from '../display';
import { step } from '../suite';
import { extentOf, orientedTrench, setAttitude } from './contour-surface';
import { eventKind, eventKindNames } from './event-choice';
import { centreOf, planeAbout, type Plane } from './geodesy';
import type { Hypocentres } from './hypocentres';
import { emptyBelow, slabSupport, type SlabBelow, type SlabSurface } from './slab';
import { splineAt, splineBasis, type SplineGrid } from './spline';
import { fitSurface, type SurfaceFit } from './surface-fit';
import { checkedPoints } from './table-input';
import type { TrenchLine } from './trench';
import { gridFor, turnedFrame, type TurnedFrame } from './turned-frame';

/** How a surface is fitted to hypocentres. */
export interface HypocentreSlabOptions {
  /** Only events inside this frame (degrees; `west` > `east` crosses the dateline). Needed when the table covers more than one slab. */
  readonly area?: { readonly west: number; readonly east: number; readonly south: number; readonly north: number };
  /** Trench line: holds the surface at its shallow end, and is what distances are measured from. */
  readonly trench?: TrenchLine;
  /** Depth of the slab at the trench, km (default 7; common practice). */
  readonly trenchDepth?: number;
  /** Events shallower than this may be crust of the upper plate, km (default 50; common practice). */
  readonly crustDepth?: number;
  /** Depths that a catalogue gives to events it cannot place, km; such events are left out (default 0, 5, 10, 33, 35; common practice). */
  readonly fixedDepths?: readonly number[];
  /** Fewest slab events that a surface is fitted to (default 40). */
  readonly minimumEvents?: number;
  /** Knot spacing of the surface, km (default: 50, wider where the area is large). */
  readonly knotSpacing?: number;
  /** 1σ of a bias common to all depths, such as that of the velocity model, km (default 5; an assumption). */
  readonly systematic?: number;
  /**
   * `middle` (default): the middle of the upper plane of seismicity. `top`: raised across the slab until one slab event in twenty lies above
   * it, which is nearer to what published models call the top of the slab, and too shallow by the location errors of the catalogue.
   */
  readonly follow?: 'middle' | 'top';
}

/** A slab surface fitted to hypocentres, with the events it stands on. */
export interface HypocentreSlab extends SlabSurface {
  readonly kind: 'hypocentres';
  /** The events that were weighed: position, depth, kind (0 slab · 1 lower plane · 2 shallow crust · 3 neither) and probability of `slab`. */
  readonly events: {
    readonly longitude: Float64Array;
    readonly latitude: Float64Array;
    readonly depth: Float64Array;
    readonly kind: Uint8Array;
    readonly slabProbability: Float64Array;
    /** km below the surface, measured across the slab. */
    readonly across: Float64Array;
  };
  readonly counts: {
    readonly given: number;
    readonly fixedDepth: number;
    readonly slab: number;
    readonly lowerPlane: number;
    readonly crust: number;
    readonly neither: number;
  };
  /** 1σ of the slab events about the surface, across the slab, km. */
  readonly scatter: number;
  /** How far the surface was raised across the slab from the middle of the events to their top, km (0 with `middle`). */
  readonly raisedBy: number;
  /** Distance of the lower plane of seismicity below the upper one, km, or undefined where there is none. */
  readonly planeSeparation?: number;
}

/** Supported where at least this many slab events lie within this distance. */
const supportEvents = 3;
const supportRadius = 40;
/** No depth is given further than this from the nearest slab event, km. */
const reach = 150;

/**
 * Fits a slab surface to hypocentres, choosing the slab's events against crustal and double-plane seismicity.
 *
 * The surface follows the middle of the upper plane of seismicity: the top of the slab lies some km above it (see `follow`). Its 1σ holds the
 * scatter of the events, the stiffness of the surface and `systematic`. Depths are given up to 150 km from slab events, marked as
 * extrapolated where fewer than three lie within 40 km. Describes where past earthquakes were; forecasts nothing.
 *
 * @param events from `readHypocentres` or `hypocentresOf`
 * @param options see HypocentreSlabOptions; all lengths in km
 * @returns a surface with `depthAt(longitudes, latitudes)` in km, `at(…)`, and the events with their kind
 * @throws RangeError where there are too few events, they lie along a line, or they cover more than one slab can
 * @source Eilers & Marx 1996; Wood & Fasiolo 2017; Dempster et al. 1977
 * @example const slab = slabFromHypocentres(quakes, { area: { west: -132, east: -127, south: -46, north: -43 } })
 */
export function slabFromHypocentres(events: Hypocentres, options: HypocentreSlabOptions = {}): HypocentreSlab & Showable {
  const { trenchDepth = 7, crustDepth = 50, fixedDepths = [0, 5, 10, 33, 35], minimumEvents = 40, systematic = 5, follow = 'middle' } = options;
  if (!(events?.depth instanceof Float64Array)) throw new RangeError('slabFromHypocentres: events must come from readHypocentres or hypocentresOf.');
  for (const [name, value] of Object.entries({ trenchDepth, crustDepth, minimumEvents, systematic: systematic + 1e-12 })) {
    if (!(value > 0)) throw new RangeError(`slabFromHypocentres: ${name} must be a positive number, not ${String(value)}.`);
  }
  if (options.knotSpacing !== undefined && !(options.knotSpacing >= 10))
    throw new RangeError(`slabFromHypocentres: knotSpacing must be at least 10 km, not ${String(options.knotSpacing)}.`);
  if (follow !== 'middle' && follow !== 'top')
    throw new RangeError(`slabFromHypocentres: follow must be "middle" or "top", not "${String(follow)}".`);

  const inArea = rowsInArea(events, options.area);
  const fixed = new Set(fixedDepths);
  const rows = inArea.filter((i) => !fixed.has(events.depth[i]));
  const pick = (list: Float64Array) => Float64Array.from(rows, (i) => list[i]);
  const longitude = pick(events.longitude);
  const latitude = pick(events.latitude);
  const depth = pick(events.depth);
  const error =
    events.depthError === undefined ? new Float64Array(rows.length) : pick(events.depthError).map((value) => (Number.isFinite(value) ? value : 0));
  let deep = 0;
  for (const z of depth) if (z >= crustDepth) deep++;
  const where = options.area === undefined ? '' : ' in the area';
  if (deep < minimumEvents / 2) {
    throw new RangeError(
      `slabFromHypocentres: only ${deep} of ${inArea.length} events${where} are deeper than ${crustDepth} km, where the crust of the upper ` +
        `plate ends; at least ${Math.ceil(minimumEvents / 2)} are needed to find a slab. ` +
        'Widen the area, use a longer catalogue, or take published depths (slabFromDepths).',
    );
  }

  const plane = planeAbout(centreOf(longitude, latitude));
  const frame = turnedFrame(plane, longitude, latitude, depth, crustDepth);
  const anchor =
    options.trench === undefined
      ? { x: new Float64Array(0), y: new Float64Array(0) }
      : frame.turn(plane.project(options.trench.longitude, options.trench.latitude));
  const grid = gridFor(frame, options.knotSpacing);
  const fit = fitSurface({ x: frame.x, y: frame.y, depth, error, anchorX: anchor.x, anchorY: anchor.y, anchorDepth: trenchDepth }, grid, crustDepth);
  const counts = countKinds(fit, events.size, inArea.length - rows.length);
  if (counts.slab < minimumEvents) {
    throw new RangeError(
      `slabFromHypocentres: ${counts.slab} of ${rows.length} events${where} lie on one surface (${counts.crust} look like shallow crust, ` +
        `${counts.neither} like neither); at least ${minimumEvents} are needed. ` +
        'Widen the area, use a longer catalogue, or take published depths (slabFromDepths).',
    );
  }
  return finish({
    events: { longitude, latitude, depth },
    fit,
    frame,
    plane,
    grid,
    counts,
    options: { ...options, systematic, follow, crustDepth, trenchDepth },
    source: events,
  });
}

function rowsInArea(events: Hypocentres, area: HypocentreSlabOptions['area']): number[] {
  const rows: number[] = [];
  if (area !== undefined) {
    const { west, east, south, north } = area;
    if (![west, east, south, north].every(Number.isFinite) || south >= north) {
      throw new RangeError('slabFromHypocentres: area needs west, east, south and north in degrees, with south below north.');
    }
    const width = (((east - west) % 360) + 360) % 360;
    for (let i = 0; i < events.size; i++) {
      const fromWest = (((events.longitude[i] - west) % 360) + 360) % 360;
      if (fromWest <= width && events.latitude[i] >= south && events.latitude[i] <= north) rows.push(i);
    }
    if (rows.length === 0)
      throw new RangeError(
        `slabFromHypocentres: no event lies in the area ${west} to ${east}° E, ${south} to ${north}° N. The table holds ${events.size} events.`,
      );
    return rows;
  }
  for (let i = 0; i < events.size; i++) rows.push(i);
  return rows;
}

const quantile = (values: readonly number[], share: number): number =>
  [...values].sort((a, b) => a - b)[Math.min(values.length - 1, Math.floor(share * values.length))];

function countKinds(fit: SurfaceFit, given: number, fixedDepth: number): HypocentreSlab['counts'] {
  const counts = [0, 0, 0, 0];
  for (const kind of fit.kinds) counts[kind]++;
  return { given, fixedDepth, slab: counts[0], lowerPlane: counts[1], crust: counts[2], neither: counts[3] };
}

interface Finish {
  readonly events: { readonly longitude: Float64Array; readonly latitude: Float64Array; readonly depth: Float64Array };
  readonly fit: SurfaceFit;
  readonly frame: TurnedFrame;
  readonly plane: Plane;
  readonly grid: SplineGrid;
  readonly counts: HypocentreSlab['counts'];
  readonly options: HypocentreSlabOptions & {
    readonly systematic: number;
    readonly follow: 'middle' | 'top';
    readonly crustDepth: number;
    readonly trenchDepth: number;
  };
  readonly source: Hypocentres;
}

function finish(made: Finish): HypocentreSlab & Showable {
  const { events, fit, plane, counts, options, grid } = made;
  const chosen: number[] = [];
  for (let i = 0; i < fit.kinds.length; i++) if (fit.kinds[i] === eventKind.slab) chosen.push(i);
  const raisedBy =
    options.follow === 'top'
      ? -quantile(
          chosen.map((i) => fit.across[i]),
          0.05,
        )
      : 0;
  const at = surfaceReader(made, chosen, raisedBy);
  const onSlab = {
    longitude: Float64Array.from(chosen, (i) => events.longitude[i]),
    latitude: Float64Array.from(chosen, (i) => events.latitude[i]),
    depth: Float64Array.from(chosen, (i) => events.depth[i]),
  };
  const trench = options.trench === undefined ? undefined : orientedTrench(options.trench, onSlab, plane);
  const extent = extentOf(onSlab.longitude, onSlab.latitude, plane.centre.longitude);
  const depthRange = [onSlab.depth.reduce((a, b) => Math.min(a, b), Infinity), onSlab.depth.reduce((a, b) => Math.max(a, b), -Infinity)] as const;
  const separation = fit.doublePlane && fit.mixture.share[1] > 0.02 ? fit.mixture.lowerAt : undefined;
  const notes = [...made.source.notes];
  if (counts.fixedDepth > 0) notes.push(`${counts.fixedDepth} events at depths that catalogues assign by default were left out.`);
  notes.push(
    `Of ${fit.kinds.length} events weighed, ${counts.slab} lie on the slab, ${counts.lowerPlane} on a lower plane, ${counts.crust} look ` +
      `like shallow crust, ${counts.neither} like neither.`,
  );
  if (separation !== undefined)
    notes.push(`A double seismic zone: the lower plane lies ${separation.toFixed(0)} km below the upper one, and the surface follows the upper.`);
  if (trench === undefined) notes.push('No trench line was given: there are no trench distances, and the shallow end of the surface is not held.');
  notes.push(
    options.follow === 'top'
      ? `The surface is the top of the upper seismic plane, ${raisedBy.toFixed(1)} km above its middle.`
      : 'The surface is the middle of the upper seismic plane; published models of the top of the slab lie some km to 20 km above it ({ ' +
          "follow: 'top' }).",
    'Nothing here forecasts earthquakes or eruptions.',
  );
  const slab: HypocentreSlab = {
    kind: 'hypocentres',
    name: 'hypocentres',
    ...(trench === undefined ? {} : { trench }),
    extent,
    depthRange,
    notes,
    lineage: [
      ...made.source.lineage,
      step(
        'slabFromHypocentres',
        {
          area: options.area === undefined ? null : { ...options.area },
          crustDepth: options.crustDepth,
          trenchDepth: trench === undefined ? null : options.trenchDepth,
          systematic: options.systematic,
          follow: options.follow,
          raisedBy: Number(raisedBy.toPrecision(4)),
          knotSpacing: grid.step,
          terms: grid.size,
          effectiveTerms: Number(fit.effectiveTerms.toPrecision(4)),
          rounds: fit.rounds,
          stiffness: Number(fit.stiffness.toPrecision(4)),
          scatter: Number(fit.mixture.spread.toPrecision(4)),
          counts: { ...counts },
        },
        {
          sources: ['eilers_marx_1996', 'wood_fasiolo_2017', 'dempster_1977', 'silverman_1985'],
          says:
            `A slab surface was fitted to ${counts.slab} of ${fit.kinds.length} hypocentres as a penalised spline, events being ` +
            `weighted by their probability of belonging to the ${options.follow} of the upper seismic ` +
            `plane${separation === undefined ? '' : ` (a lower plane lies ${separation.toFixed(0)} km below)`}; events scatter by ` +
            `${fit.mixture.spread.toFixed(1)} km (1σ) across it, and ${options.systematic} km were added for bias common to all depths.`,
        },
      ),
    ],
    depthAt: (longitudes, latitudes) => at(longitudes, latitudes).depth,
    at,
    events: { ...events, kind: fit.kinds, slabProbability: fit.slabShare, across: fit.across },
    counts,
    scatter: fit.mixture.spread,
    raisedBy,
    ...(separation === undefined ? {} : { planeSeparation: separation }),
  };
  return showAs(slab, () => ({
    title: 'Slab surface fitted to hypocentres',
    columns: [...eventKindNames.map((name) => `events: ${name}`), 'scatter across (km)', 'slab depths (km)', 'terms used'],
    rows: [
      [
        counts.slab,
        counts.lowerPlane,
        counts.crust,
        counts.neither,
        slab.scatter,
        `${depthRange[0].toFixed(0)}–${depthRange[1].toFixed(0)}`,
        fit.effectiveTerms,
      ],
    ],
    notes,
  }));
}

/** Reads depth, 1σ, dip and strike off the fitted surface; support from the slab events round about. */
function surfaceReader({ fit, frame, plane, grid, options }: Finish, chosen: readonly number[], raisedBy: number) {
  const index = new KDBush(Math.max(1, chosen.length));
  for (const i of chosen) index.add(frame.x[i], frame.y[i]);
  index.finish();
  const found = new Uint32Array(chosen.length);
  return (longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): SlabBelow => {
    checkedPoints(longitudes, latitudes, 'slab.at');
    const result = emptyBelow(longitudes.length);
    const { x, y } = frame.turn(plane.project(longitudes, latitudes));
    const basis = splineBasis(
      grid,
      x.map((v) => (Number.isNaN(v) ? 0 : v)),
      y.map((v) => (Number.isNaN(v) ? 0 : v)),
    );
    const value = new Float64Array(3);
    for (let i = 0; i < x.length; i++) {
      if (Number.isNaN(x[i])) continue;
      const near = index.withinInto(x[i], y[i], supportRadius, found);
      const outside =
        x[i] < grid.left ||
        y[i] < grid.bottom ||
        x[i] > grid.left + (grid.countX - 3) * grid.step ||
        y[i] > grid.bottom + (grid.countY - 3) * grid.step;
      if (outside || (near === 0 && index.withinInto(x[i], y[i], reach, found) === 0)) continue;
      splineAt(grid, basis, fit.coefficients, i, value);
      const depth = value[0] - raisedBy * Math.hypot(1, value[1], value[2]);
      if (depth <= 0) continue;
      result.depth[i] = depth;
      result.sigma[i] = Math.hypot(Math.sqrt(Math.max(0, varianceAt(grid, basis, fit.covariance, i))), options.systematic);
      result.support[i] = near >= supportEvents ? slabSupport.within : slabSupport.extrapolated;
      setAttitude(
        result,
        i,
        { slopeX: frame.cosine * value[1] - frame.sine * value[2], slopeY: frame.sine * value[1] + frame.cosine * value[2] },
        plane.local(longitudes[i], latitudes[i]),
      );
    }
    return result;
  };
}

function varianceAt(grid: SplineGrid, basis: ReturnType<typeof splineBasis>, covariance: Float64Array, i: number): number {
  let sum = 0;
  for (let a = 0; a < 4; a++) {
    for (let b = 0; b < 4; b++) {
      const n = (basis.firstX[i] + a) * grid.countY + basis.firstY[i] + b;
      const bn = basis.values[8 * i + a] * basis.values[8 * i + 4 + b];
      for (let c = 0; c < 4; c++) {
        for (let d = 0; d < 4; d++) {
          sum +=
            bn *
            basis.values[8 * i + c] *
            basis.values[8 * i + 4 + d] *
            covariance[n * grid.size + (basis.firstX[i] + c) * grid.countY + basis.firstY[i] + d];
        }
      }
    }
  }
  return sum;
}
