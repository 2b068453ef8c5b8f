import { z } from 'zod';
import { parseExpression, expressionSymbols } from '../suite';
import { bibliography, readJsonTable, ReferenceTableError, standings } from '../tables';
import type { Scheme } from './scheme';
import { buildFields } from './scheme-fields';
import { checkTiling } from './scheme-check';

const text = z.string().trim().min(1);
const pair = z.tuple([z.number(), z.number()]);
const pointSchema = z.array(z.number()).min(2).max(3);
const axisSchema = z.strictObject({
  expression: text,
  title: text,
  unit: z.string().default(''),
  scale: z.enum(['linear', 'log']).default('linear'),
});
const labelSchema = z.strictObject({ at: pair.optional(), text: z.array(text).min(1).optional() });
const basisSchema = z.enum(['volatile-free', 'as-analysed']);
const conditionShape = {
  expression: text,
  is: z.enum(['<', '<=', '>', '>=', 'between']),
  value: z.union([z.number(), pair]),
  basis: basisSchema.optional(),
  text: text.optional(),
};

/** @internal The JSON form of a scheme. */
export const schemeSchema = z.strictObject({
  key: z.string().regex(/^[a-z0-9][a-z0-9-]*$/, 'a scheme key is lower case letters, digits and -'),
  title: text,
  kind: z.enum(['polygons', 'lines', 'thresholds', 'criteria', 'points']),
  plane: z.enum(['rectangular', 'ternary']).default('rectangular'),
  /** A triangle with its first corner on the right: a line must be single-valued on the first axis, wherever custom puts that corner. */
  mirrored: z.boolean().default(false),
  sources: z.array(text).min(1),
  basis: basisSchema,
  axes: z.array(axisSchema).min(2).max(3),
  frame: z.strictObject({ x: pair, y: pair }).optional(),
  window: z.strictObject({ x: pair, y: pair }).optional(),
  fields: z.array(z.strictObject({ symbol: text, name: text, vertices: z.array(pair).min(3).optional(), label: labelSchema.optional() })).default([]),
  conventionEdges: z.array(z.tuple([pair, pair])).default([]),
  lines: z
    .array(
      z.strictObject({
        name: text,
        points: z.array(pointSchema).min(2).optional(),
        /** y = c0 + c1·x + c2·x² …, or x of y with `of: "y"`. */
        curve: z
          .strictObject({ coefficients: z.array(z.number()).min(2), of: z.enum(['x', 'y']).default('x'), from: z.number(), to: z.number() })
          .optional(),
        /** The straight line through two of the reference points. */
        through: z.tuple([text, text]).optional(),
        published: pair.optional(),
      }),
    )
    .default([]),
  points: z.array(z.strictObject({ name: text, at: pair.optional(), reservoir: text.optional() })).default([]),
  bounds: z.array(z.number()).default([]),
  criteria: z.array(z.strictObject({ ...conditionShape, weight: z.enum(['required', 'usual']).default('required') })).default([]),
  beyond: z.enum(['flag', 'refuse']).default('flag'),
  conditions: z.array(z.strictObject({ ...conditionShape, text, otherwise: z.enum(['refuse', 'flag']) })).default([]),
  limits: z.array(text).default([]),
  standing: z.enum(standings),
  standingNote: z.string().default(''),
});

/** @internal */
export type SchemeFile = z.output<typeof schemeSchema>;

/**
 * Reads one scheme file and makes it ready to be asked and drawn.
 *
 * @param file path inside reference-tables/, or an absolute path with `absolute`
 * @throws ReferenceTableError naming the file, the key or field, and what is allowed
 */
export function readScheme(file: string, options: { absolute?: boolean } = {}): Scheme {
  const made = readJsonTable(file, schemeSchema, options);
  const fail = (why: string): never => {
    throw new ReferenceTableError(`${file} (scheme "${made.key}"): ${why}`);
  };
  checkShape(made, options.absolute === true, fail);
  const scheme = buildFields(made, options.absolute === true ? file : 'built in', fail);
  // Built-in schemes are checked by the tests; a user's own when it is loaded.
  if (options.absolute === true) checkTiling(scheme, fail);
  return scheme;
}

function checkShape(made: SchemeFile, own: boolean, fail: (why: string) => never): void {
  for (const source of made.sources) {
    // A user's own scheme may cite what is not in the bibliography; a built-in one may not.
    if (!own && !bibliography().has(source)) fail(`the source "${source}" is not in reference-tables/bibliography/.`);
  }
  if ((made.plane === 'ternary') !== (made.axes.length === 3)) fail('a ternary plane has three axes (its corners), a rectangular one has two.');
  for (const { expression } of [...made.axes, ...made.criteria, ...made.conditions]) {
    try {
      expressionSymbols(parseExpression(expression));
    } catch (error) {
      fail((error as Error).message);
    }
  }
  for (const { expression, is, value } of [...made.criteria, ...made.conditions]) {
    if ((is === 'between') !== Array.isArray(value)) fail(`"${expression}": "between" takes [low, high], the other comparisons one number.`);
  }
  const symbols = new Set<string>();
  for (const { symbol } of made.fields) {
    if (symbols.has(symbol)) fail(`the field symbol "${symbol}" is used twice.`);
    symbols.add(symbol);
  }
  const wanted: Readonly<Record<SchemeFile['kind'], () => void>> = {
    polygons: () => {
      if (made.fields.length === 0 || made.fields.some(({ vertices }) => vertices === undefined))
        fail('kind "polygons" needs fields, each with vertices [[x, y], …].');
      if (made.frame === undefined) fail('kind "polygons" needs a frame { "x": [low, high], "y": [low, high] } on which open fields are closed.');
    },
    lines: () => {
      if (made.lines.length === 0 || made.fields.length !== made.lines.length + 1) {
        fail(
          `kind "lines" needs lines from below upward and one field more than lines; it has ${made.lines.length} lines and ${made.fields.length} fields.`,
        );
      }
      if (made.frame === undefined) fail('kind "lines" needs a frame { "x": [low, high], "y": [low, high] }.');
      if (made.axes.some(({ scale }) => scale === 'log'))
        fail('kind "lines" takes linear axes; on a log axis give the fields as polygons, or write log10(…) as the expression.');
    },
    thresholds: () => {
      if (made.bounds.length === 0 || made.fields.length !== made.bounds.length + 1) {
        fail(`kind "thresholds" needs bounds and one field more than bounds; it has ${made.bounds.length} bounds and ${made.fields.length} fields.`);
      }
      if (made.bounds.some((bound, i) => i > 0 && bound <= made.bounds[i - 1])) fail('bounds must ascend.');
      if (made.frame === undefined) fail('kind "thresholds" needs a frame { "x": [low, high], "y": [low, high] } for drawing.');
    },
    criteria: () => {
      if (made.criteria.length === 0 || made.fields.length !== 2) fail('kind "criteria" needs criteria and two fields: met, then not met.');
      if (made.frame === undefined && made.window === undefined)
        fail('kind "criteria" needs a window { "x": [low, high], "y": [low, high] } for drawing.');
    },
    points: () => {
      if (made.points.length === 0) fail('kind "points" needs points.');
      if (made.frame === undefined && made.window === undefined) fail('kind "points" needs a window { "x": [low, high], "y": [low, high] }.');
    },
  };
  wanted[made.kind]();
}
