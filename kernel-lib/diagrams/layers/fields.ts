import { unit, specNumber, labelUnit, type Canvas, type Layer } from '../layer';
import { frameBox, toPixels } from '../frame';
import { clipPolygon, polygonArea, type Point } from '../geometry';
import { waysToBreak, type PlacedLabel } from '../place-labels';
import { ink, textSize } from '../theme';

/** One field of a diagram. */
export interface FieldShape {
  readonly name: string;
  /** Short symbol, set where the name does not fit (`S1`). */
  readonly symbol?: string;
  /** Corners in data coordinates. */
  readonly polygon: readonly Point[];
  /** Where the name stands best (data coordinates), and how it is broken there. */
  readonly label?: { readonly x: number; readonly y: number; readonly text: readonly string[] };
}

export interface FieldsOptions {
  /** Boundaries to draw instead of the polygons' own sides. */
  readonly edges?: readonly (readonly Point[])[];
  /** Sides that close a polygon on the outer frame only, or are a convention: drawn dashed, or not at all. */
  readonly conventionEdges?: readonly (readonly Point[])[];
  /** The scheme's own outer frame: sides that lie on it are not boundaries, and are not drawn. */
  readonly outer?: { readonly x: readonly [number, number]; readonly y: readonly [number, number] };
  readonly names?: boolean;
  /** Width of the boundaries in pixels (default 0.9). */
  readonly width?: number;
}

type Segment = readonly [Point, Point];

/**
 * Fields with thin boundaries, each drawn once, and their names in muted italics inside the visible part of the field: on one line or
 * broken; where no name fits, the symbol; where nothing fits, nothing.
 */
export function fieldsLayer(fields: readonly FieldShape[], options: FieldsOptions = {}): Layer {
  const convention = (options.conventionEdges ?? []).flatMap(segmentsOf);
  const boundaries =
    options.edges?.flatMap(segmentsOf) ??
    boundarySegments(fields, options.outer).filter((side) => !convention.some((other) => sameSegment(side, other)));
  return {
    labelRank: 2,
    claim({ frame, placer }) {
      for (const side of [...boundaries, ...convention]) placer.avoidLine(side.map((point) => toPixels(frame, point)));
    },
    draw(canvas) {
      const { frame } = canvas;
      const rule = (sides: readonly Segment[], style: object) =>
        unit(
          frame,
          { type: 'rule', color: ink.line, strokeWidth: options.width ?? 0.9, strokeCap: 'round', tooltip: null, ...style },
          sides.map(ruleRow),
          {
            x2: { field: 'x2' },
            y2: { field: 'y2' },
          },
        );
      const names = options.names === false ? [] : placeNames(canvas, fields);
      return [
        ...(boundaries.length === 0 ? [] : [rule(boundaries, {})]),
        ...(convention.length === 0 ? [] : [rule(convention, { strokeDash: [4, 3] })]),
        ...(names.length === 0 ? [] : [labelUnit(frame, names, { fontStyle: 'italic', fontSize: textSize.fieldName, color: ink.fieldName })]),
      ];
    },
  };
}

function placeNames({ frame, placer }: Canvas, fields: readonly FieldShape[]): PlacedLabel[] {
  const style = { size: textSize.fieldName, italic: true };
  const visible = fields.map((field) => ({
    field,
    polygon: clipPolygon(
      field.polygon.map((point) => toPixels(frame, point)),
      frameBox(frame),
    ),
  }));
  // Small fields have the least choice of place, so they choose first.
  visible.sort((a, b) => polygonArea(a.polygon) - polygonArea(b.polygon));
  const names: PlacedLabel[] = [];
  for (const { field, polygon } of visible) {
    const { label } = field;
    const ways = [...(label === undefined ? [] : [label.text]), ...waysToBreak(field.name, style)];
    const best = label === undefined ? undefined : toPixels(frame, [label.x, label.y]);
    const placed =
      placer.placeInside(polygon, ways, style, best) ??
      (field.symbol === undefined ? undefined : placer.placeInside(polygon, [[field.symbol]], style));
    if (placed !== undefined) names.push(placed);
  }
  return names;
}

function ruleRow([[x, y], [x2, y2]]: Segment): object {
  return { x: specNumber(x), y: specNumber(y), x2: specNumber(x2), y2: specNumber(y2) };
}

function segmentsOf(points: readonly Point[]): Segment[] {
  return points.slice(1).map((point, i) => [points[i], point]);
}

const near = (a: Point, b: Point) => Math.abs(a[0] - b[0]) < 1e-9 * (1 + Math.abs(a[0])) && Math.abs(a[1] - b[1]) < 1e-9 * (1 + Math.abs(a[1]));
const sameSegment = ([a, b]: Segment, [c, d]: Segment) => (near(a, c) && near(b, d)) || (near(a, d) && near(b, c));

/** The sides of all polygons, cut at each other's corners so that a shared stretch comes once; sides on the outer frame left out. */
function boundarySegments(fields: readonly FieldShape[], outer: FieldsOptions['outer']): Segment[] {
  const corners = fields.flatMap(({ polygon }) => polygon);
  const onOuter = ([a, b]: Segment) =>
    outer !== undefined &&
    ([0, 1] as const).some((axis) => {
      const [low, high] = axis === 0 ? outer.x : outer.y;
      return a[axis] === b[axis] && (a[axis] === low || a[axis] === high);
    });
  const sides: Segment[] = [];
  const seen = new Set<string>();
  for (const { polygon } of fields) {
    polygon.forEach((start, i) => {
      const end = polygon[(i + 1) % polygon.length];
      const cuts = corners.filter((corner) => between(corner, start, end)).sort((a, b) => distance(start, a) - distance(start, b));
      const stops = [start, ...cuts, end];
      for (let k = 1; k < stops.length; k++) {
        const side: Segment = [stops[k - 1], stops[k]];
        const name = [side.map(String).sort()].join(' ');
        if (near(side[0], side[1]) || seen.has(name) || onOuter(side)) continue;
        seen.add(name);
        sides.push(side);
      }
    });
  }
  return sides;
}

const distance = (a: Point, b: Point) => Math.hypot(a[0] - b[0], a[1] - b[1]);

function between(point: Point, start: Point, end: Point): boolean {
  if (near(point, start) || near(point, end)) return false;
  return Math.abs(distance(start, point) + distance(point, end) - distance(start, end)) < 1e-9 * (1 + distance(start, end));
}
