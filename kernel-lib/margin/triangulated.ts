import Delaunator from 'delaunator';
import KDBush from 'kdbush';

/** Where a point lies in a triangulation: a triangle and its three weights, or outside the hull. */
export interface Located {
  /** First half-edge of the triangle, or -1 outside the hull. */
  triangle: number;
  a: number;
  b: number;
  c: number;
}

/** Depth and slope at a point, in units of the plane. */
export interface Sloped {
  depth: number;
  slopeX: number;
  slopeY: number;
  /** How far the curved surface departs from flat triangles here: the size of the interpolation error. */
  bulge: number;
}

/**
 * A curved surface through scattered points: Delaunay triangles, with the slope at each vertex from a local least-squares quadratic. Inside
 * a triangle, depth = Σ wᵢ (zᵢ + ½ gᵢ·(p − pᵢ)) with the triangle's weights w: this joins without a step along edges and is exact for
 * every surface that is quadratic, which flat triangles are not. Slopes are computed only where they are asked for.
 */
export class TriangulatedSurface {
  private readonly triangles: Uint32Array;
  private readonly halfedges: Int32Array;
  private readonly incoming: Int32Array;
  private readonly slopes: Float64Array;
  private readonly hasSlope: Uint8Array;
  private readonly index: KDBush;
  private readonly found: Uint32Array;
  private readonly spacing: number;
  private at = 0;

  constructor(
    readonly x: Float64Array,
    readonly y: Float64Array,
    readonly z: Float64Array,
    private readonly reach: number,
  ) {
    const coordinates = new Float64Array(2 * x.length);
    for (let i = 0; i < x.length; i++) {
      coordinates[2 * i] = x[i];
      coordinates[2 * i + 1] = y[i];
    }
    const { triangles, halfedges } = new Delaunator(coordinates);
    this.triangles = triangles;
    this.halfedges = halfedges;
    this.incoming = new Int32Array(x.length).fill(-1);
    for (let e = 0; e < triangles.length; e++) {
      const end = triangles[next(e)];
      // An edge on the hull is kept as the start, so that going round the vertex meets every triangle.
      if (halfedges[e] === -1 || this.incoming[end] === -1) this.incoming[end] = e;
    }
    this.index = new KDBush(x.length);
    let [left, right, bottom, top] = [Infinity, -Infinity, Infinity, -Infinity];
    for (let i = 0; i < x.length; i++) {
      this.index.add(x[i], y[i]);
      left = Math.min(left, x[i]);
      right = Math.max(right, x[i]);
      bottom = Math.min(bottom, y[i]);
      top = Math.max(top, y[i]);
    }
    this.index.finish();
    this.found = new Uint32Array(x.length);
    this.spacing = Math.sqrt(((right - left) * (top - bottom)) / x.length) || 1;
    this.slopes = new Float64Array(2 * x.length);
    this.hasSlope = new Uint8Array(x.length);
  }

  get triangleCount(): number {
    return this.triangles.length / 3;
  }

  /** A triangle near a point: one at a vertex that the index finds close by, else the last one found. */
  private startNear(px: number, py: number): number {
    for (let radius = this.spacing, tries = 0; tries < 5; tries++, radius *= 2) {
      if (this.index.withinInto(px, py, radius, this.found) === 0) continue;
      const edge = this.incoming[this.found[0]];
      if (edge !== -1) return edge - (edge % 3);
    }
    return this.at;
  }

  /** Finds the triangle of a point by walking there from one that is near. */
  locate(px: number, py: number, into: Located): Located {
    const { x, y, triangles, halfedges } = this;
    let t = this.startNear(px, py);
    for (let steps = 0; steps < triangles.length; steps++) {
      const i = triangles[t];
      const j = triangles[t + 1];
      const k = triangles[t + 2];
      const wa = cross(x[j], y[j], x[k], y[k], px, py);
      const wb = cross(x[k], y[k], x[i], y[i], px, py);
      const wc = cross(x[i], y[i], x[j], y[j], px, py);
      const area = wa + wb + wc;
      // Delaunator's triangles all turn the same way, so a weight of the other sign says which edge to cross.
      const a = wa / area;
      const b = wb / area;
      const c = wc / area;
      const least = Math.min(a, b, c);
      if (least >= -1e-12) {
        this.at = t;
        into.triangle = t;
        into.a = a;
        into.b = b;
        into.c = c;
        return into;
      }
      const crossed = halfedges[least === a ? t + 1 : least === b ? t + 2 : t];
      if (crossed === -1) {
        this.at = t;
        into.triangle = -1;
        return into;
      }
      t = crossed - (crossed % 3);
    }
    into.triangle = -1;
    return into;
  }

  longestEdge(triangle: number): number {
    const { x, y, triangles } = this;
    let longest = 0;
    for (let e = triangle; e < triangle + 3; e++) {
      const from = triangles[e];
      const to = triangles[next(e)];
      longest = Math.max(longest, Math.hypot(x[to] - x[from], y[to] - y[from]));
    }
    return longest;
  }

  evaluate(px: number, py: number, where: Located, into: Sloped): Sloped {
    let depth = 0;
    let flat = 0;
    let slopeX = 0;
    let slopeY = 0;
    for (let corner = 0; corner < 3; corner++) {
      const v = this.triangles[where.triangle + corner];
      const weight = corner === 0 ? where.a : corner === 1 ? where.b : where.c;
      if (this.hasSlope[v] === 0) this.findSlope(v);
      const gx = this.slopes[2 * v];
      const gy = this.slopes[2 * v + 1];
      flat += weight * this.z[v];
      depth += weight * (this.z[v] + 0.5 * (gx * (px - this.x[v]) + gy * (py - this.y[v])));
      slopeX += weight * gx;
      slopeY += weight * gy;
    }
    into.depth = depth;
    into.bulge = Math.abs(depth - flat);
    into.slopeX = slopeX;
    into.slopeY = slopeY;
    return into;
  }

  private readonly ring: number[] = [];
  private readonly mark = new Map<number, true>();

  /** The vertices within two edges of a vertex. */
  private gatherRing(v: number): void {
    this.ring.length = 0;
    this.mark.clear();
    this.mark.set(v, true);
    this.addNeighbours(v);
    for (let n = 0, first = this.ring.length; n < first; n++) this.addNeighbours(this.ring[n]);
  }

  private addNeighbours(v: number): void {
    const start = this.incoming[v];
    if (start === -1) return;
    let e = start;
    do {
      this.addNeighbour(this.triangles[e]);
      const out = next(e);
      const other = this.halfedges[out];
      if (other === -1) this.addNeighbour(this.triangles[next(out)]);
      e = other;
    } while (e !== -1 && e !== start);
  }

  private addNeighbour(v: number): void {
    if (this.mark.has(v)) return;
    this.mark.set(v, true);
    this.ring.push(v);
  }

  private readonly normal = new Float64Array(25);
  private readonly right = new Float64Array(5);

  /** Slope at a vertex: weighted least squares of dz = gx·dx + gy·dy + quadratic terms over the neighbours within reach. */
  private findSlope(v: number): void {
    this.hasSlope[v] = 1;
    this.gatherRing(v);
    const { ring, normal, right, x, y, z } = this;
    let spread = 0;
    let used = 0;
    for (const n of ring) {
      const d = Math.hypot(x[n] - x[v], y[n] - y[v]);
      if (d > this.reach) continue;
      spread += d;
      used++;
    }
    if (used < 2 || spread === 0) return;
    const unit = spread / used;
    const terms = used >= 7 ? 5 : 2;
    normal.fill(0);
    right.fill(0);
    const row = [0, 0, 0, 0, 0];
    for (const n of ring) {
      const dx = (x[n] - x[v]) / unit;
      const dy = (y[n] - y[v]) / unit;
      const d2 = dx * dx + dy * dy;
      if (d2 * unit * unit > this.reach * this.reach) continue;
      const weight = 1 / (d2 + 0.02);
      row[0] = dx;
      row[1] = dy;
      row[2] = dx * dx;
      row[3] = dx * dy;
      row[4] = dy * dy;
      for (let p = 0; p < terms; p++) {
        right[p] += weight * row[p] * (z[n] - z[v]);
        for (let q = 0; q <= p; q++) normal[5 * p + q] += weight * row[p] * row[q];
      }
    }
    // A trace of ridge keeps a fit defined where all neighbours lie on one line, and pulls it to no slope there.
    for (let p = 0; p < terms; p++) normal[5 * p + p] += 1e-6 * (1 + normal[5 * p + p]);
    solveInPlace(normal, right, terms);
    this.slopes[2 * v] = right[0] / unit;
    this.slopes[2 * v + 1] = right[1] / unit;
  }
}

const next = (e: number): number => (e % 3 === 2 ? e - 2 : e + 1);
const cross = (ax: number, ay: number, bx: number, by: number, px: number, py: number): number => (bx - ax) * (py - ay) - (by - ay) * (px - ax);

/** Solves a symmetric positive definite system of up to five unknowns held in the lower triangle of rows of five (Cholesky, in place). */
function solveInPlace(matrix: Float64Array, right: Float64Array, size: number): void {
  for (let j = 0; j < size; j++) {
    for (let k = 0; k < j; k++) matrix[5 * j + j] -= matrix[5 * j + k] ** 2;
    const pivot = Math.sqrt(Math.max(matrix[5 * j + j], 1e-300));
    matrix[5 * j + j] = pivot;
    for (let i = j + 1; i < size; i++) {
      for (let k = 0; k < j; k++) matrix[5 * i + j] -= matrix[5 * i + k] * matrix[5 * j + k];
      matrix[5 * i + j] /= pivot;
    }
  }
  for (let i = 0; i < size; i++) {
    for (let k = 0; k < i; k++) right[i] -= matrix[5 * i + k] * right[k];
    right[i] /= matrix[5 * i + i];
  }
  for (let i = size - 1; i >= 0; i--) {
    for (let k = i + 1; k < size; k++) right[i] -= matrix[5 * k + i] * right[k];
    right[i] /= matrix[5 * i + i];
  }
}
