import { BandedCholesky, quadraticForm, traceOfProduct } from './banded';
import { findTwoPlanes, updateMixture, type ResidualMixture } from './event-choice';
import { addSquares, bendingPenalty, splineAt, splineBasis, type SplineGrid } from './spline';

/** What is fitted: events on a plane, and places where the surface is known (the trench). */
export interface SurfaceData {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly depth: Float64Array;
  /** 1σ of each depth beyond the common scatter, km (0 where not known). */
  readonly error: Float64Array;
  readonly anchorX: Float64Array;
  readonly anchorY: Float64Array;
  readonly anchorDepth: number;
}

export interface SurfaceFit {
  readonly grid: SplineGrid;
  readonly coefficients: Float64Array;
  /** Covariance of the coefficients (size × size), km². */
  readonly covariance: Float64Array;
  readonly slabShare: Float64Array;
  readonly kinds: Uint8Array;
  /** Distance of each event below the surface, across the slab, km. */
  readonly across: Float64Array;
  readonly mixture: ResidualMixture;
  readonly stiffness: number;
  readonly effectiveTerms: number;
  readonly rounds: number;
  readonly doublePlane: boolean;
}

/** 1σ of the anchors' depth, km. */
const anchorSpread = 3;
/** Rounds that stand on deep events alone, and km by which the events' least depth is then lowered each round. */
const deepOnly = 6;
const growth = 8;

/**
 * Fits the surface and chooses its events at the same time.
 *
 * The surface is a penalised tensor spline (Eilers & Marx 1996) with the bending energy of a thin plate; its stiffness is updated with the
 * fit (Wood & Fasiolo 2017), and its covariance is the Bayesian one of a smoother (Silverman 1985). Events are weighted by their
 * probability of belonging to the slab's upper plane, from a mixture of upper plane, lower plane, shallow crust and anything else
 * (expectation–maximisation, Dempster et al. 1977). The start stands on events deeper than the crust can reach, so that shallow
 * seismicity cannot lead the surface away; shallower events join as the surface comes to explain them.
 */
export function fitSurface(data: SurfaceData, grid: SplineGrid, crustDepth: number): SurfaceFit {
  const { x, y, depth, error } = data;
  const size = x.length;
  const basis = splineBasis(grid, x, y);
  const anchors = splineBasis(grid, data.anchorX, data.anchorY);
  const anchorDepth = new Float64Array(data.anchorX.length).fill(data.anchorDepth);
  const penalty = bendingPenalty(grid);
  const slabShare = new Float64Array(size);
  for (let i = 0; i < size; i++) slabShare[i] = depth[i] >= crustDepth ? 1 : 0;
  const kinds = new Uint8Array(size);
  const across = new Float64Array(size);
  const weights = new Float64Array(size);
  const cosine = new Float64Array(size).fill(0.8);
  const slope = new Float64Array(3);
  const mixture: ResidualMixture = { spread: 15, lowerAt: 25, lowerSpread: 8, share: [0.6, 0, 0.2, 0.2] };
  let stiffness = size;
  let coefficients = new Float64Array(grid.size);
  let inverse = new Float64Array(0);
  let doublePlane = false;
  let effectiveTerms = 0;
  let rounds = 0;
  let twoPlaneTries = 0;
  // Depth from which events count: lowered as the surface grows up-dip from the deep events. After a split it starts deeper, because just
  // below the crust's limit only the lower plane is deep enough to count.
  let threshold = crustDepth;
  let settledAt = deepOnly;
  for (; rounds < 60; rounds++) {
    const variance = mixture.spread ** 2;
    for (let i = 0; i < size; i++) {
      const square = cosine[i] * cosine[i];
      weights[i] = (slabShare[i] * square * variance) / (variance + error[i] * error[i] * square);
    }
    const band = new Float64Array(penalty.length);
    const right = new Float64Array(grid.size);
    addSquares(grid, basis, weights, depth, band, right);
    addSquares(grid, anchors, new Float64Array(anchorDepth.length).fill(variance / anchorSpread ** 2), anchorDepth, band, right);
    for (let k = 0; k < band.length; k++) band[k] += stiffness * penalty[k];
    for (let i = 0; i < grid.size; i++) band[i * (grid.width + 1) + grid.width] += 1e-9 * (1 + stiffness);
    const system = new BandedCholesky(band, grid.size, grid.width);
    const before = coefficients;
    coefficients = system.solve(right) as Float64Array<ArrayBuffer>;
    inverse = system.inverse() as Float64Array<ArrayBuffer>;

    let change = 0;
    for (let i = 0; i < grid.size; i++) change = Math.max(change, Math.abs(coefficients[i] - before[i]));
    for (let i = 0; i < size; i++) {
      splineAt(grid, basis, coefficients, i, slope);
      cosine[i] = 1 / Math.sqrt(1 + slope[1] * slope[1] + slope[2] * slope[2]);
      across[i] = (depth[i] - slope[0]) * cosine[i];
    }
    const taken = stiffness * traceOfProduct(inverse, penalty, grid.size, grid.width);
    effectiveTerms = grid.size - taken;
    const bend = quadraticForm(coefficients, penalty, grid.size, grid.width);
    const wanted = (variance * Math.max(1e-3, grid.size - 3 - taken)) / Math.max(bend, 1e-9);
    // Steps of at most a factor of five keep the choice of events and the stiffness from chasing each other.
    stiffness = Math.min(1e8, Math.max(1e-3, Math.min(5 * stiffness, Math.max(stiffness / 5, wanted))));

    const restarted = rounds >= deepOnly && rounds % 4 === 2 && twoPlaneTries < 3 && !doublePlane && splitPlanes();
    updateMixture(across, depth, crustDepth, mixture, slabShare, kinds, { least: 2, most: rounds < deepOnly ? 20 : 12 });
    if (restarted) {
      threshold = crustDepth + mixture.lowerAt + growth;
      settledAt = rounds + Math.ceil(threshold / growth);
    }
    if (rounds >= deepOnly) threshold -= growth;
    if (threshold > 0) for (let i = 0; i < size; i++) if (depth[i] < threshold) slabShare[i] = 0;
    if (!restarted && rounds > settledAt + 10 && change < 0.05) break;
  }
  const covariance = inverse.map((value) => value * mixture.spread ** 2);
  return { grid, coefficients, covariance, slabShare, kinds, across, mixture, stiffness, effectiveTerms, rounds, doublePlane };

  /** Looks for a double plane in the deep events near the surface; moves the residuals so that the surface follows the upper one. */
  function splitPlanes(): boolean {
    twoPlaneTries++;
    const near: number[] = [];
    for (let i = 0; i < size; i++) if (depth[i] >= crustDepth && Math.abs(across[i]) < 50) near.push(across[i]);
    const planes = findTwoPlanes(near);
    if (planes === undefined) return false;
    doublePlane = true;
    for (let i = 0; i < size; i++) across[i] -= planes.upperAt;
    mixture.spread = planes.spread;
    mixture.lowerAt = planes.lowerAt - planes.upperAt;
    mixture.lowerSpread = planes.spread;
    const slab = mixture.share[0] + mixture.share[1];
    mixture.share[0] = slab * (1 - planes.lowerShare);
    mixture.share[1] = slab * planes.lowerShare;
    return true;
  }
}
