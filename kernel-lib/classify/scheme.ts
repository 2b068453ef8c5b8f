import type { Standing } from '../tables';

/** A point of a scheme, in the units of its axes (for a triangle: per cent of the first and the second corner). */
export type PlanePoint = readonly [number, number];

/** What the analysis must be put on before a scheme may be asked: its basis. */
export type SchemeBasis = 'volatile-free' | 'as-analysed';

/** One axis: ordinary arithmetic over analytes, with the title and unit that a diagram writes. */
export interface SchemeAxis {
  /** For `evaluate`; `[mol Al2O3]` and `[cation Al]` give molar proportions, `[Mg-number]` the Mg-number. */
  readonly expression: string;
  /** Title with real subscripts, without unit, e.g. `SiO₂`. */
  readonly title: string;
  /** `wt %`, `ppm`, '' for a bare ratio. */
  readonly unit: string;
  readonly scale: 'linear' | 'log';
}

/** Where a field's name stands on a diagram, in axis units, and how it is broken into lines. */
export interface FieldLabel {
  readonly x: number;
  readonly y: number;
  readonly text: readonly string[];
}

/** One field: symbol, official name, and its outline (in axis units; empty for fields that are no area). */
export interface SchemeField {
  readonly symbol: string;
  readonly name: string;
  readonly vertices: readonly PlanePoint[];
  readonly label: FieldLabel;
  /** Range of x over which its boundaries were published. */
  readonly published: readonly [number, number];
}

/** A boundary as it is drawn. `published` false: an own continuation beyond the published ends. */
export interface SchemeLine {
  readonly name: string;
  readonly points: readonly PlanePoint[];
  readonly published: boolean;
}

/** A reference composition marked on a diagram. */
export interface SchemePoint {
  readonly name: string;
  readonly at: PlanePoint;
}

/** How a value is compared with a published limit. */
export type Comparison = '<' | '<=' | '>' | '>=' | 'between';

/** A condition on a sample. `value` is a number, or [low, high] for `between` (ends included). */
export interface SchemeCondition {
  readonly expression: string;
  readonly is: Comparison;
  readonly value: number | readonly [number, number];
  readonly basis: SchemeBasis;
  /** What it says in words. */
  readonly text: string;
}

/** A condition for asking the scheme at all: `refuse` gives no answer outside it, `flag` gives the answer with a remark. */
export interface SchemeLimit extends SchemeCondition {
  readonly otherwise: 'refuse' | 'flag';
}

/** One criterion of a list. `usual` ones are reported but do not decide. */
export interface SchemeCriterion extends SchemeCondition {
  readonly weight: 'required' | 'usual';
}

/**
 * How a scheme divides samples: by areas or lines of a plane, by bounds on one axis, by a list of criteria; `points` has reference points
 * but no boundary, so it places samples without naming them.
 */
export type SchemeKind = 'polygons' | 'lines' | 'thresholds' | 'criteria' | 'points';

/** One classification or discrimination scheme, ready to be asked and to be drawn. Made from one JSON file; needs no code. */
export interface Scheme {
  readonly key: string;
  readonly title: string;
  readonly kind: SchemeKind;
  readonly plane: 'rectangular' | 'ternary';
  /** A triangle is drawn with its first corner on the right instead of the left. */
  readonly mirrored: boolean;
  /** Source keys of the bibliography. */
  readonly sources: readonly string[];
  readonly basis: SchemeBasis;
  /**
   * x and y, or the three corners of a triangle (x and y are then per cent of the first and the second). `thresholds` and `criteria` ask
   * y alone, or the criteria; their x is what they are drawn against.
   */
  readonly axes: readonly SchemeAxis[];
  /** The range that fields are closed on, in axis units. Edges on it are a convention of drawing. */
  readonly frame: { readonly x: readonly [number, number]; readonly y: readonly [number, number] };
  /** The usual window of a diagram. */
  readonly window: { readonly x: readonly [number, number]; readonly y: readonly [number, number] };
  readonly fields: readonly SchemeField[];
  /** The boundaries as drawn. */
  readonly lines: readonly SchemeLine[];
  readonly points: readonly SchemePoint[];
  /** Bounds on y, ascending (thresholds). */
  readonly bounds: readonly number[];
  readonly criteria: readonly SchemeCriterion[];
  /** What happens beyond the published ends of a boundary: the answer carries a remark, or is refused. */
  readonly beyond: 'flag' | 'refuse';
  readonly conditions: readonly SchemeLimit[];
  /** Limits of use, in sentences. */
  readonly limits: readonly string[];
  readonly standing: Standing;
  /** What is known about the standing of the geometry. */
  readonly standingNote: string;
  /** `built in`, or the file it was loaded from. */
  readonly origin: string;
}
