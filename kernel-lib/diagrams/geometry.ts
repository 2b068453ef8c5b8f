/** Plane geometry of drawing, in whatever coordinates the caller uses. */
export type Point = readonly [x: number, y: number];

export interface Box {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

export function boxesOverlap(a: Box, b: Box): boolean {
  return a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;
}

export function isInside([x, y]: Point, polygon: readonly Point[]): boolean {
  let inside = false;
  for (let i = 0, j = polygon.length - 1; i < polygon.length; j = i++) {
    const [ax, ay] = polygon[i];
    const [bx, by] = polygon[j];
    if (ay > y !== by > y && x < ((bx - ax) * (y - ay)) / (by - ay) + ax) inside = !inside;
  }
  return inside;
}

/** The polygon's part inside the box (Sutherland & Hodgman 1974); empty when there is none. */
export function clipPolygon(polygon: readonly Point[], box: Box): Point[] {
  const sides: readonly [(p: Point) => number, (a: Point, b: Point) => Point][] = [
    [([x]) => x - box.left, (a, b) => crossVertical(a, b, box.left)],
    [([x]) => box.right - x, (a, b) => crossVertical(a, b, box.right)],
    [([, y]) => y - box.top, (a, b) => crossHorizontal(a, b, box.top)],
    [([, y]) => box.bottom - y, (a, b) => crossHorizontal(a, b, box.bottom)],
  ];
  let clipped: Point[] = [...polygon];
  for (const [depth, cross] of sides) {
    const input = clipped;
    clipped = [];
    input.forEach((point, i) => {
      const before = input[(i + input.length - 1) % input.length];
      const inside = depth(point) >= 0;
      if (inside !== depth(before) >= 0) clipped.push(cross(before, point));
      if (inside) clipped.push(point);
    });
  }
  return clipped;
}

function crossVertical([ax, ay]: Point, [bx, by]: Point, x: number): Point {
  return [x, ay + ((by - ay) * (x - ax)) / (bx - ax)];
}

function crossHorizontal([ax, ay]: Point, [bx, by]: Point, y: number): Point {
  return [ax + ((bx - ax) * (y - ay)) / (by - ay), y];
}

/** Whether the segment from a to b touches the box (Liang & Barsky 1984). */
export function segmentMeetsBox([ax, ay]: Point, [bx, by]: Point, box: Box): boolean {
  let from = 0;
  let to = 1;
  const dx = bx - ax;
  const dy = by - ay;
  for (const [p, q] of [[-dx, ax - box.left], [dx, box.right - ax], [-dy, ay - box.top], [dy, box.bottom - ay]] as const) {
    if (p === 0) {
      if (q < 0) return false;
    } else if (p < 0) from = Math.max(from, q / p);
    else to = Math.min(to, q / p);
    if (from > to) return false;
  }
  return true;
}

/** Area of a polygon, without sign. */
export function polygonArea(polygon: readonly Point[]): number {
  let twice = 0;
  for (let i = 0, j = polygon.length - 1; i < polygon.length; j = i++) twice += polygon[j][0] * polygon[i][1] - polygon[i][0] * polygon[j][1];
  return Math.abs(twice) / 2;
}
