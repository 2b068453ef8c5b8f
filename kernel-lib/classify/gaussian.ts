import type { FlatFields } from './geometry';

/** Number of quadrature nodes: the worst error of `owenT` against published values is below 1e-9. */
const order = 14;

/** Nodes and weights of Gauss–Legendre quadrature on [0, 1]. */
function gaussLegendre(count: number): { nodes: Float64Array; weights: Float64Array } {
  const nodes = new Float64Array(count);
  const weights = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (count + 0.5));
    let slope = 1;
    for (let step = 0; step < 50; step++) {
      let previous = 1;
      let value = x;
      for (let k = 2; k <= count; k++) [previous, value] = [value, ((2 * k - 1) * x * value - (k - 1) * previous) / k];
      slope = (count * (x * value - previous)) / (x * x - 1);
      const move = value / slope;
      x -= move;
      if (Math.abs(move) < 1e-16) break;
    }
    nodes[i] = (1 + x) / 2;
    weights[i] = 1 / ((1 - x * x) * slope * slope);
  }
  return { nodes, weights };
}

const { nodes, weights } = gaussLegendre(order);

/** Standard deviations beyond which a Gaussian is taken as zero (its tail is below 1e-15). */
export const farAway = 8;

/**
 * Distribution function of the standard normal.
 *
 * @source West 2005 after Hart 1968 (double precision), as rational approximations
 */
export function normalBelow(x: number): number {
  const size = Math.abs(x);
  if (size > 37) return x > 0 ? 1 : 0;
  const tail = Math.exp((-size * size) / 2);
  let below: number;
  if (size < 7.07106781186547) {
    const top =
      (((((0.0352624965998911 * size + 0.700383064443688) * size + 6.37396220353165) * size + 33.912866078383) * size + 112.079291497871) * size +
        221.213596169931) *
        size +
      220.206867912376;
    const bottom =
      ((((((0.0883883476483184 * size + 1.75566716318264) * size + 16.064177579207) * size + 86.7807322029461) * size + 296.564248779674) * size +
        637.333633378831) *
        size +
        793.826512519948) *
        size +
      440.413735824752;
    below = (tail * top) / bottom;
  } else below = tail / (size + 1 / (size + 2 / (size + 3 / (size + 4 / (size + 0.65))))) / 2.506628274631;
  return x > 0 ? 1 - below : below;
}

/**
 * Owen's function T(h, a) = 1/2π ∫₀ᵃ exp(−h²(1 + x²)/2)/(1 + x²) dx for h ≥ 0.
 *
 * @source Owen 1956
 */
export function owenT(h: number, a: number): number {
  if (a === 0 || h > farAway) return 0;
  const size = Math.abs(a);
  let value: number;
  if (size <= 1) value = owenDirect(h, size);
  else {
    // T for a > 1 follows from T at (ah, 1/a): the integrand stays smooth.
    const top = h * size;
    const near = normalBelow(h);
    const far = normalBelow(top);
    value = (near + far) / 2 - near * far - owenDirect(top, 1 / size);
  }
  return a < 0 ? -value : value;
}

function owenDirect(h: number, a: number): number {
  const half = (h * h) / 2;
  if (half > 40) return 0;
  let sum = 0;
  for (let i = 0; i < order; i++) {
    const square = 1 + (a * nodes[i]) ** 2;
    sum += (weights[i] * Math.exp(-half * square)) / square;
  }
  return (a * sum) / (2 * Math.PI);
}

/** Smallest part of the larger spread that the other direction is given, so that errors along one line only do not divide by zero. */
const leastSpread = 1e-5;

/**
 * Probability that a bivariate normal lies in each field: exact for straight outlines, edge by edge.
 *
 * Coordinates are turned so that the spread is round; the mass between the centre and an edge is then an angle less two values of Owen's
 * function.
 *
 * @param out one number a field
 */
export function fieldMasses(flat: FlatFields, x: number, y: number, varX: number, covXY: number, varY: number, out: Float64Array): void {
  const spread = Math.sqrt(Math.max(varX, varY));
  if (!(spread > 0)) {
    out.fill(NaN);
    return;
  }
  const a = Math.max(Math.sqrt(varX), leastSpread * spread);
  const b = covXY / a;
  const c = Math.max(Math.sqrt(Math.max(0, varY - b * b)), leastSpread * spread);
  const { start, x1, y1, x2, y2, boxes } = flat;
  const reachX = farAway * a;
  const reachY = farAway * Math.sqrt(b * b + c * c);
  for (let k = 0; k < flat.count; k++) {
    if (boxes[4 * k] > x + reachX || boxes[4 * k + 1] < x - reachX || boxes[4 * k + 2] > y + reachY || boxes[4 * k + 3] < y - reachY) {
      out[k] = 0;
      continue;
    }
    let mass = 0;
    let turned = 0;
    for (let e = start[k], end = start[k + 1]; e < end; e++) {
      // Edges are kept with their ends ordered by x; here the outline is walked in its own direction.
      const forward = flat.forward[e] === 1;
      const px = ((forward ? x1[e] : x2[e]) - x) / a;
      const qx = ((forward ? x2[e] : x1[e]) - x) / a;
      const py = ((forward ? y1[e] : y2[e]) - y - b * px) / c;
      const qy = ((forward ? y2[e] : y1[e]) - y - b * qx) / c;
      const cross = px * qy - py * qx;
      if (cross === 0) continue;
      const ux = qx - px;
      const uy = qy - py;
      const length = Math.sqrt(ux * ux + uy * uy);
      const h = Math.abs(cross) / length;
      const from = (px * ux + py * uy) / length;
      const to = (qx * ux + qy * uy) / length;
      const sign = cross > 0 ? 1 : -1;
      turned += sign * (Math.atan2(to, h) - Math.atan2(from, h));
      if (h <= farAway) mass -= sign * (owenT(h, to / h) - owenT(h, from / h));
    }
    out[k] = Math.min(1, Math.max(0, Math.abs(mass + turned / (2 * Math.PI))));
  }
}
