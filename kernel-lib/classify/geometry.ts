import type { PlanePoint } from './scheme';

/** A straight piece of a field's outline, ends ordered by x (then y), so that two fields compute their common edge alike. */
export interface Edge {
  readonly x1: number;
  readonly y1: number;
  readonly x2: number;
  readonly y2: number;
  /** False for an edge that only closes a field on the frame: it is no boundary, and distance to it means nothing. */
  readonly real: boolean;
  /** Whether the outline runs from the first end to the second. */
  readonly forward: boolean;
}

/** The edges of an outline. */
export function outlineEdges(vertices: readonly PlanePoint[], isReal: (a: PlanePoint, b: PlanePoint) => boolean): readonly Edge[] {
  return vertices.map((a, i) => {
    const b = vertices[(i + 1) % vertices.length];
    const forward = a[0] < b[0] || (a[0] === b[0] && a[1] <= b[1]);
    const [first, second] = forward ? [a, b] : [b, a];
    return { x1: first[0], y1: first[1], x2: second[0], y2: second[1], real: isReal(a, b), forward };
  });
}

/**
 * Edges of many fields in flat arrays: field k owns edges start[k] … start[k + 1] − 1. Boxes give the fields' extents.
 */
export interface FlatFields {
  readonly count: number;
  readonly start: Int32Array;
  readonly x1: Float64Array;
  readonly y1: Float64Array;
  readonly x2: Float64Array;
  readonly y2: Float64Array;
  readonly real: Uint8Array;
  readonly forward: Uint8Array;
  readonly boxes: Float64Array;
}

export function flattenFields(fields: readonly (readonly Edge[])[]): FlatFields {
  const edges = fields.flat();
  const start = new Int32Array(fields.length + 1);
  fields.forEach((each, k) => (start[k + 1] = start[k] + each.length));
  const boxes = new Float64Array(fields.length * 4);
  fields.forEach((each, k) => {
    boxes[4 * k] = Math.min(...each.map(({ x1 }) => x1));
    boxes[4 * k + 1] = Math.max(...each.map(({ x2 }) => x2));
    boxes[4 * k + 2] = Math.min(...each.map(({ y1, y2 }) => Math.min(y1, y2)));
    boxes[4 * k + 3] = Math.max(...each.map(({ y1, y2 }) => Math.max(y1, y2)));
  });
  const pick = (of: (edge: Edge) => number) => Float64Array.from(edges, of);
  return {
    count: fields.length,
    start,
    boxes,
    x1: pick(({ x1 }) => x1),
    y1: pick(({ y1 }) => y1),
    x2: pick(({ x2 }) => x2),
    y2: pick(({ y2 }) => y2),
    real: Uint8Array.from(edges, ({ real }) => (real ? 1 : 0)),
    forward: Uint8Array.from(edges, ({ forward }) => (forward ? 1 : 0)),
  };
}

/**
 * The field of one point, or −1. A point on a boundary belongs to the field on its higher-x side, and on a horizontal boundary to the
 * upper field: for silica on the x axis, the lower bound is inclusive. (The point is moved, in thought, by an infinitesimal step in x
 * and a still smaller one in y; so every point of a tiling has exactly one field.)
 */
export function fieldAt(flat: FlatFields, x: number, y: number): number {
  const { start, x1, y1, x2, y2, boxes } = flat;
  for (let k = 0; k < flat.count; k++) {
    if (x < boxes[4 * k] || x > boxes[4 * k + 1] || y < boxes[4 * k + 2] || y > boxes[4 * k + 3]) continue;
    let inside = false;
    for (let e = start[k], end = start[k + 1]; e < end; e++) {
      if (x < x1[e] || x >= x2[e]) continue;
      // > 0 when the edge passes above the point.
      const above = (y2[e] - y1[e]) * (x - x1[e]) - (x2[e] - x1[e]) * (y - y1[e]);
      if (above > 0 || (above === 0 && y2[e] > y1[e])) inside = !inside;
    }
    if (inside) return k;
  }
  return -1;
}

/** Distance from a point to the nearest real edge of a field; NaN when the field has none. */
export function distanceToEdge(flat: FlatFields, field: number, x: number, y: number): number {
  const { start, x1, y1, x2, y2, real } = flat;
  let best = Infinity;
  for (let e = start[field], end = start[field + 1]; e < end; e++) {
    if (real[e] === 0) continue;
    const dx = x2[e] - x1[e];
    const dy = y2[e] - y1[e];
    let t = ((x - x1[e]) * dx + (y - y1[e]) * dy) / (dx * dx + dy * dy);
    t = t < 0 ? 0 : t > 1 ? 1 : t;
    const px = x - x1[e] - t * dx;
    const py = y - y1[e] - t * dy;
    const squared = px * px + py * py;
    if (squared < best) best = squared;
  }
  return best === Infinity ? NaN : Math.sqrt(best);
}

/** y of a polyline (x ascending) at x; straight continuation beyond its ends. */
export function polylineAt(points: readonly PlanePoint[], x: number): number {
  let i = 1;
  while (i < points.length - 1 && x > points[i][0]) i++;
  const [xa, ya] = points[i - 1];
  const [xb, yb] = points[i];
  return ya + ((yb - ya) * (x - xa)) / (xb - xa);
}

/** Signed area of an outline. */
export function outlineArea(vertices: readonly PlanePoint[]): number {
  let twice = 0;
  vertices.forEach(([xa, ya], i) => {
    const [xb, yb] = vertices[(i + 1) % vertices.length];
    twice += xa * yb - xb * ya;
  });
  return twice / 2;
}

/**
 * A place for a name inside an outline: the point of a grid that is farthest from all edges, measured in fractions of the window. The part
 * of the outline outside the window is not used.
 */
export function labelPlace(
  vertices: readonly PlanePoint[],
  window: { readonly x: readonly [number, number]; readonly y: readonly [number, number] },
): PlanePoint {
  const width = window.x[1] - window.x[0];
  const height = window.y[1] - window.y[0];
  const unit = vertices.map(([x, y]): PlanePoint => [(x - window.x[0]) / width, (y - window.y[0]) / height]);
  const flat = flattenFields([outlineEdges(unit, () => true)]);
  const steps = 48;
  let best: PlanePoint = unit[0];
  let most = -1;
  for (let i = 1; i < steps; i++) {
    for (let j = 1; j < steps; j++) {
      const x = i / steps;
      const y = j / steps;
      if (fieldAt(flat, x, y) < 0) continue;
      // Names are wide and low: room to the sides counts less than it measures.
      const room = Math.min(distanceToEdge(flat, 0, x, y), x, 1 - x, y, 1 - y);
      if (room > most + 1e-9) {
        most = room;
        best = [x, y];
      }
    }
  }
  return [window.x[0] + best[0] * width, window.y[0] + best[1] * height];
}
