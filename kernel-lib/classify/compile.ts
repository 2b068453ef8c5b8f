import { flattenFields, outlineEdges, type Edge, type FlatFields } from './geometry';
import type { PlanePoint, Scheme } from './scheme';

/** A scheme's fields in the coordinates in which its lines are straight and its distances are measured. */
export interface CompiledScheme {
  readonly flat: FlatFields;
  /** From axis units to those coordinates: logarithms on log axes, an equilateral triangle (side 100) for three corners. */
  readonly toPlane: (x: number, y: number) => PlanePoint;
  /** One field alone. */
  readonly single: (field: number) => FlatFields;
}

const compiled = new WeakMap<Scheme, CompiledScheme>();
const halfRootThree = Math.sqrt(3) / 2;

/** Corner y on top, corner x at the lower left, the third at the lower right. */
export function ternaryPlane(x: number, y: number): PlanePoint {
  return [100 - x - y / 2, y * halfRootThree];
}

/** The plane of a scheme; made once a scheme. */
export function compileScheme(scheme: Scheme): CompiledScheme {
  let made = compiled.get(scheme);
  if (made === undefined) compiled.set(scheme, (made = compile(scheme)));
  return made;
}

function compile(scheme: Scheme): CompiledScheme {
  const logX = scheme.axes[0].scale === 'log';
  const logY = scheme.axes[1].scale === 'log';
  const toPlane =
    scheme.plane === 'ternary' ? ternaryPlane : (x: number, y: number): PlanePoint => [logX ? Math.log10(x) : x, logY ? Math.log10(y) : y];
  const real = realEdges(scheme);
  const edges = scheme.fields
    .filter(({ vertices }) => vertices.length > 0)
    .map(({ vertices }): readonly Edge[] => {
      const flags = vertices.map((a, i) => real(a, vertices[(i + 1) % vertices.length]));
      return outlineEdges(
        vertices.map(([x, y]) => toPlane(x, y)),
        () => true,
      ).map((edge, i) => ({ ...edge, real: flags[i] }));
    });
  return { flat: flattenFields(edges), toPlane, single: (field) => flattenFields([edges[field]]) };
}

/** An edge is real when it runs along one of the scheme's lines. */
function realEdges(scheme: Scheme): (a: PlanePoint, b: PlanePoint) => boolean {
  const onLines = scheme.lines.map(({ points }) => points);
  return (a, b) =>
    onLines.some((points) => points.some((_, i) => i > 0 && onSegment(points[i - 1], points[i], a) && onSegment(points[i - 1], points[i], b)));
}

function onSegment([xa, ya]: PlanePoint, [xb, yb]: PlanePoint, [x, y]: PlanePoint): boolean {
  // Most pairs are far apart: a look at the extents decides them.
  const slack = 1e-9 * (1 + Math.abs(x) + Math.abs(y));
  if (x < Math.min(xa, xb) - slack || x > Math.max(xa, xb) + slack || y < Math.min(ya, yb) - slack || y > Math.max(ya, yb) + slack) return false;
  const size = Math.hypot(xb - xa, yb - ya);
  const away = Math.abs((xb - xa) * (y - ya) - (yb - ya) * (x - xa)) / size;
  const along = ((x - xa) * (xb - xa) + (y - ya) * (yb - ya)) / size;
  return away < 1e-9 * Math.max(1, size) && along > -1e-9 && along < size + 1e-9;
}
