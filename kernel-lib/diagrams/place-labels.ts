import { boxesOverlap, isInside, segmentMeetsBox, type Box, type Point } from './geometry';
import { textWidth, type TextStyle } from './font';

/** A label that found its place: middle of its box in pixels, and its lines. */
export interface PlacedLabel {
  readonly x: number;
  readonly y: number;
  readonly lines: readonly string[];
  readonly box: Box;
}

/** Lines stand this far apart, in multiples of the text size. */
export const lineHeight = 1.12;

export function textBlock(lines: readonly string[], style: TextStyle): { width: number; height: number } {
  return { width: Math.max(...lines.map((line) => textWidth(line, style))), height: lines.length * style.size * lineHeight };
}

/** The ways to set a name: on one line, or broken at spaces, slashes and hyphens into two or three of most even width. */
export function waysToBreak(text: string, style: TextStyle): string[][] {
  const words = text.split(/(?<=[/-])\s*|\s+/).filter((word) => word !== '');
  const ways: string[][] = [[text]];
  for (let lines = 2; lines <= Math.min(3, words.length); lines++) {
    let best: string[] = [];
    let bestWidth = Infinity;
    const cut = (from: number, left: number, done: string[]): void => {
      if (left === 1) {
        const way = [...done, joinWords(words.slice(from))];
        const width = Math.max(...way.map((line) => textWidth(line, style)));
        if (width < bestWidth) {
          bestWidth = width;
          best = way;
        }
        return;
      }
      for (let to = from + 1; to <= words.length - left + 1; to++) cut(to, left - 1, [...done, joinWords(words.slice(from, to))]);
    };
    cut(0, lines, []);
    ways.push(best);
  }
  return ways;
}

function joinWords(words: readonly string[]): string {
  return words.reduce((line, word) => (line === '' ? word : line.endsWith('-') ? line + word : `${line} ${word}`), '');
}

/** How far a label stays from a line, in pixels. */
const clearance = 3;
const cell = 4;

/**
 * Finds places for labels in one frame, in pixels: never on a line, never on another label, never outside, and off the samples where
 * that can be had. Tell it first of everything that is drawn, then ask.
 */
export class LabelPlacer {
  private readonly taken: Box[] = [];
  private readonly segments: (readonly [Point, Point])[] = [];
  private readonly columns: number;
  private readonly rows: number;
  private readonly counts: Float64Array;
  private sums: Float64Array | undefined;

  constructor(private readonly area: Box) {
    this.columns = Math.max(1, Math.ceil((area.right - area.left) / cell));
    this.rows = Math.max(1, Math.ceil((area.bottom - area.top) / cell));
    this.counts = new Float64Array(this.columns * this.rows);
  }

  /** A line that no label may stand on. */
  avoidLine(points: readonly Point[]): void {
    for (let i = 1; i < points.length; i++) this.segments.push([points[i - 1], points[i]]);
  }

  /** Something solid that no label may stand on. */
  avoidBox(box: Box): void {
    this.taken.push(box);
  }

  /** Samples, which a label would rather not cover. */
  avoidPoint(x: number, y: number): void {
    const column = Math.floor((x - this.area.left) / cell);
    const row = Math.floor((y - this.area.top) / cell);
    if (column < 0 || row < 0 || column >= this.columns || row >= this.rows) return;
    this.counts[row * this.columns + column]++;
    this.sums = undefined;
  }

  get labels(): readonly Box[] {
    return this.taken;
  }

  /** Samples under a box, from summed counts. */
  private pointsUnder(box: Box): number {
    const width = this.columns + 1;
    if (this.sums === undefined) {
      const sums = new Float64Array(width * (this.rows + 1));
      for (let row = 0; row < this.rows; row++) {
        for (let column = 0; column < this.columns; column++) {
          sums[(row + 1) * width + column + 1] =
            this.counts[row * this.columns + column] + sums[row * width + column + 1] + sums[(row + 1) * width + column] - sums[row * width + column];
        }
      }
      this.sums = sums;
    }
    const at = (value: number, low: number, most: number) => Math.min(most, Math.max(0, Math.round((value - low) / cell)));
    const left = at(box.left - 3, this.area.left, this.columns);
    const right = at(box.right + 3, this.area.left, this.columns);
    const top = at(box.top - 3, this.area.top, this.rows);
    const bottom = at(box.bottom + 3, this.area.top, this.rows);
    return this.sums[bottom * width + right] - this.sums[top * width + right] - this.sums[bottom * width + left] + this.sums[top * width + left];
  }

  /** Whether nothing solid, and no line, stands in a box of the frame. */
  isFreeBox(box: Box): boolean {
    return this.isFree(box);
  }

  private isFree(box: Box): boolean {
    const { area } = this;
    if (box.left < area.left || box.right > area.right || box.top < area.top || box.bottom > area.bottom) return false;
    const wide = { left: box.left - clearance, right: box.right + clearance, top: box.top - clearance, bottom: box.bottom + clearance };
    for (const other of this.taken) if (boxesOverlap(wide, other)) return false;
    for (const [a, b] of this.segments) if (segmentMeetsBox(a, b, wide)) return false;
    return true;
  }

  /**
   * A place inside a polygon: tries each way of setting the text in turn, and takes the best place of the first way that fits anywhere
   * without covering samples, else the place that covers fewest.
   *
   * @param polygon the visible part of the field, in pixels
   * @param ways texts as lines, best first
   * @param preferred where it would stand best
   */
  placeInside(polygon: readonly Point[], ways: readonly (readonly string[])[], style: TextStyle, preferred?: Point): PlacedLabel | undefined {
    if (polygon.length < 3) return undefined;
    const xs = polygon.map(([x]) => x);
    const ys = polygon.map(([, y]) => y);
    const bounds: Box = { left: Math.min(...xs), right: Math.max(...xs), top: Math.min(...ys), bottom: Math.max(...ys) };
    let best: { label: PlacedLabel; score: number } | undefined;
    ways.forEach((lines, rank) => {
      const { width, height } = textBlock(lines, style);
      const step = Math.max(4, Math.min(12, (bounds.right - bounds.left) / 40));
      const middle =
        preferred !== undefined && isInside(preferred, polygon)
          ? preferred
          : ([(bounds.left + bounds.right) / 2, (bounds.top + bounds.bottom) / 2] as const);
      const consider = (x: number, y: number): void => {
        const box = { left: x - width / 2, right: x + width / 2, top: y - height / 2, bottom: y + height / 2 };
        const away = Math.hypot((x - middle[0]) / (bounds.right - bounds.left), (y - middle[1]) / (bounds.bottom - bounds.top));
        const score = 6 * this.pointsUnder(box) + 3 * away + 2.5 * rank;
        if (best !== undefined && score >= best.score) return;
        if (!isInside([x, y], polygon) || !this.isFree(box) || crosses(polygon, box)) return;
        best = { label: { x, y, lines, box }, score };
      };
      consider(...middle);
      for (let y = bounds.top + height / 2; y <= bounds.bottom - height / 2; y += step) {
        for (let x = bounds.left + width / 2; x <= bounds.right - width / 2; x += step) consider(x, y);
      }
    });
    return this.take(best);
  }

  private take(best: { readonly label: PlacedLabel } | undefined): PlacedLabel | undefined {
    if (best !== undefined) this.taken.push(best.label.box);
    return best?.label;
  }

  /**
   * A place beside a point: right, left, above, below and the corners, then farther away.
   *
   * @param anchors the point, or several (along a line) of which any will do, best first
   * @param reach distance of the text from the point, in pixels
   * @returns undefined when every place near is taken
   */
  placeBeside(anchors: readonly Point[], lines: readonly string[], style: TextStyle, reach = 6): PlacedLabel | undefined {
    const { width, height } = textBlock(lines, style);
    let best: { label: PlacedLabel; score: number } | undefined;
    anchors.forEach(([x, y], place) => {
      rings.forEach((times, ring) => {
        const gap = reach * times;
        directions.forEach(([dx, dy], rank) => {
          const cx = x + dx * (gap + width / 2);
          const cy = y + dy * (gap + height / 2) * (dx === 0 ? 1 : 0.8);
          const box = { left: cx - width / 2, right: cx + width / 2, top: cy - height / 2, bottom: cy + height / 2 };
          const score = 3 * this.pointsUnder(box) + 4 * ring + 0.5 * rank + (4 * place) / anchors.length;
          if ((best === undefined || score < best.score) && this.isFree(box)) best = { label: { x: cx, y: cy, lines, box }, score };
        });
      });
    });
    return this.take(best);
  }
}

/** Distances at which a place beside a point is looked for, in multiples of the reach. */
const rings = [1, 1.8, 2.8, 4] as const;
const directions: readonly Point[] = [
  [1, 0],
  [-1, 0],
  [0, -1],
  [0, 1],
  [1, -1],
  [-1, -1],
  [1, 1],
  [-1, 1],
];

function crosses(polygon: readonly Point[], box: Box): boolean {
  const wide = { left: box.left - clearance, right: box.right + clearance, top: box.top - clearance, bottom: box.bottom + clearance };
  for (let i = 0, j = polygon.length - 1; i < polygon.length; j = i++) if (segmentMeetsBox(polygon[j], polygon[i], wide)) return true;
  return false;
}
