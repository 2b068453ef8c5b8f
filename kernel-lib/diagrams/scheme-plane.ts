import { classify, schemeColumns, verdictOf, type Scheme, type SchemeVerdict } from '../classify';
import type { IronBasis } from '../recast';
import { column, type Column, type Suite } from '../suite';
import { drawable, dressText } from './chemical-text';
import { windowAround, type Axis, type Frame, type WindowChoice } from './frame';
import type { Point } from './geometry';
import { schemeTitles } from './scheme-words';
import { ternaryFrame, ternaryPoint, ternaryShares, type TernaryCorner } from './ternary';

/** Where things stand on the diagram of a scheme: a plain frame, or a triangle in one. */
export interface SchemePlane {
  readonly isTernary: boolean;
  /** From a point of the scheme (axis units; per cent of the first two corners) to the frame's own coordinates. */
  readonly place: (point: Point) => Point;
  /** The way back. */
  readonly toAxes: (point: Point) => Point;
  /** The corners of a triangle, left, top, right. */
  readonly corners?: readonly [TernaryCorner, TernaryCorner, TernaryCorner];
}

/** @param letters names of the corners, left, top, right, where the diagram is known by them (A, F, M) */
export function planeOf(scheme: Scheme, letters?: readonly [string, string, string]): SchemePlane {
  const same = (point: Point): Point => point;
  if (scheme.plane !== 'ternary') return { isTernary: false, place: same, toAxes: same };
  // A mirrored scheme counts its first corner at the right.
  const { mirrored } = scheme;
  const [left, top, right] = mirrored ? [...scheme.axes].reverse() : scheme.axes;
  const corner = ({ title }: { readonly title: string }, i: number): TernaryCorner =>
    letters === undefined ? { name: drawable(title) } : { name: letters[mirrored ? 2 - i : i], meaning: drawable(title) };
  return {
    isTernary: true,
    place: ([first, second]) => ternaryPoint(mirrored ? 100 - first - second : first, second),
    toAxes: ([x, y]) => {
      const [first, second] = ternaryShares(x, y);
      return [mirrored ? 100 - first - second : first, second];
    },
    corners: [corner(left, 0), corner(top, 1), corner(right, 2)],
  };
}

/** The columns that are drawn, in the frame's coordinates; undefined where the suite has nothing of an axis. */
export function drawnColumns(
  suite: Suite,
  { scheme, x, y }: SchemeVerdict,
  { place, isTernary }: SchemePlane,
  options: { readonly sigma: boolean; readonly iron?: IronBasis },
): { readonly x: Column; readonly y: Column } | undefined {
  if (x === undefined || y === undefined) {
    // A suite of no samples has no columns to speak of, and draws the empty diagram.
    const none = column({ symbol: '', values: [] });
    return suite.size === 0 ? { x: none, y: none } : undefined;
  }
  if (isTernary) {
    const placed = placeAll(x.values, y.values, place);
    return { x: { ...x, values: placed.x }, y: { ...y, values: placed.y } };
  }
  if (!options.sigma) return { x, y };
  const [withSigmaX, withSigmaY] = schemeColumns(suite, scheme, options.iron);
  return { x: withSigmaX ?? x, y: withSigmaY ?? y };
}

/**
 * Where the liquid of a model path lies.
 *
 * @throws RangeError when it lacks what the axes read
 */
export function pathOnScheme(who: string, liquid: Suite, scheme: Scheme, { place }: SchemePlane, iron?: IronBasis): { x: Float64Array; y: Float64Array } {
  const { x, y, remarks } = verdictOf(classify(liquid, scheme, { probability: 'none', ...(iron === undefined ? {} : { iron }) }), scheme.key);
  if (x === undefined || y === undefined || !x.values.some(Number.isFinite)) {
    throw new RangeError(`${who}: a path cannot be drawn here, because its liquid ${dressText(remarks[0] ?? 'is empty')}.`);
  }
  return placeAll(x.values, y.values, place);
}

function placeAll(first: Float64Array, second: Float64Array, place: SchemePlane['place']): { x: Float64Array; y: Float64Array } {
  const x = new Float64Array(first.length);
  const y = new Float64Array(first.length);
  for (let i = 0; i < x.length; i++) [x[i], y[i]] = place([first[i], second[i]]);
  return { x, y };
}

/** What is to be seen, for the choice of the window. */
export interface Shown {
  readonly samples: { readonly x: Float64Array; readonly y: Float64Array };
  readonly paths: readonly { readonly points: readonly Point[] }[];
}

/** The frame of a scheme's diagram. */
export function schemeFrame(
  scheme: Scheme,
  { samples, paths }: Shown,
  { window = 'data', width, height }: { readonly window?: WindowChoice; readonly width: number; readonly height: number },
): Frame {
  if (scheme.plane === 'ternary') return ternaryFrame(width);
  const titles = schemeTitles(scheme);
  const axis = (side: 'x' | 'y'): Axis => {
    const at = side === 'x' ? 0 : 1;
    const { scale } = scheme.axes[at];
    const whole = scheme.window[side];
    // A little more than the samples, so that their fields can be told; never beyond the frame that fields are closed on.
    const leastSpan = scale === 'log' ? Math.max(4, (whole[1] / whole[0]) ** 0.35) : (whole[1] - whole[0]) * 0.3;
    const within = mostlyInside(samples[side], whole) ? whole : scheme.frame[side];
    const values = [samples[side], ...paths.map(({ points }) => points.map((point) => point[at]))];
    const around = () => windowAround(values, { scale, whole, leastSpan, within });
    const limits = typeof window === 'object' ? (window[side] ?? around()) : window === 'whole' ? whole : around();
    return { title: titles[at], scale, window: limits };
  };
  return { width, height, x: axis('x'), y: axis('y') };
}

/**
 * Of many samples, a few far outliers do not squeeze the rest: where 95 % lie in the usual window, it bounds the diagram, and those outside
 * are counted.
 */
function mostlyInside(values: Float64Array, [low, high]: readonly [number, number]): boolean {
  const known = values.filter(Number.isFinite);
  return known.length >= 100 && known.filter((value) => value >= low && value <= high).length >= 0.95 * known.length;
}
