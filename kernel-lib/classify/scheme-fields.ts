import { evaluate, column, suiteOf } from '../suite';
import { reservoir } from '../tables';
import { labelPlace, polylineAt } from './geometry';
import type { PlanePoint, Scheme, SchemeBasis, SchemeCondition, SchemeField, SchemeLine, SchemePoint } from './scheme';
import type { SchemeFile } from './scheme-file';

type Fail = (why: string) => never;
type Frame = Scheme['frame'];

/** Straight pieces that a published curve is cut into: the error stays below 0.01 of an axis unit. */
const curvePieces = 100;

/** Makes a scheme ready to draw and to ask from its JSON form: lines become fields, names find their place. */
export function buildFields(made: SchemeFile, origin: string, fail: Fail): Scheme {
  const frame: Frame = made.frame ?? made.window!;
  const window: Frame = made.window ?? made.frame!;
  const points = made.points.map((each) => schemePoint(each, made, fail));
  const { outlines, lines, ranges } = outlinesOf(made, frame, points, fail);
  const fields = made.fields.map(({ symbol, name, label }, k): SchemeField => {
    const vertices = outlines[k];
    const log = made.axes.slice(0, 2).map(({ scale }) => scale === 'log' && made.plane === 'rectangular');
    const [x, y] = label?.at ?? (vertices.length === 0 ? [NaN, NaN] : placeOnScale(vertices, window, log));
    return { symbol, name, vertices, label: { x, y, text: label?.text ?? breakName(name) }, published: ranges[k] };
  });
  const condition = <Of extends Omit<SchemeCondition, 'basis' | 'text'> & { basis?: SchemeBasis; text?: string }>(each: Of) => ({
    ...each,
    basis: each.basis ?? made.basis,
    text: each.text ?? conditionText(each),
  });
  return {
    key: made.key,
    title: made.title,
    kind: made.kind,
    plane: made.plane,
    mirrored: made.mirrored,
    sources: made.sources,
    basis: made.basis,
    axes: made.axes,
    frame,
    window,
    fields,
    lines,
    points,
    bounds: made.bounds,
    criteria: made.criteria.map(condition),
    beyond: made.beyond,
    conditions: made.conditions.map(condition),
    limits: made.limits,
    standing: made.standing,
    standingNote: made.standingNote,
    origin,
  };
}

/** A condition in words: `SiO2 ≥ 56`. */
function conditionText({ expression, is, value }: Omit<SchemeCondition, 'basis' | 'text'>): string {
  const written = expression.replace(/\[(mol |cation )?([^\]]+)\]/g, '$2');
  if (is === 'between') return `${written} ${(value as readonly [number, number]).join('–')}`;
  return `${written} ${is === '<=' ? '≤' : is === '>=' ? '≥' : is} ${String(value)}`;
}

function breakName(name: string): readonly string[] {
  const words = name.split(' ');
  return words.length === 1
    ? [name]
    : words.length === 2
      ? words
      : [words.slice(0, Math.ceil(words.length / 2)).join(' '), words.slice(Math.ceil(words.length / 2)).join(' ')];
}

/** The place for a name, found as the reader sees the field: on a log axis in logarithms, and inside the drawing window. */
function placeOnScale(vertices: readonly PlanePoint[], window: Frame, log: readonly boolean[]): PlanePoint {
  const onto = (value: number, j: number) => (log[j] ? Math.log10(value) : value);
  const back = (value: number, j: number) => (log[j] ? 10 ** value : value);
  const range = (ends: readonly [number, number], j: number) => [onto(ends[0], j), onto(ends[1], j)] as const;
  const [x, y] = labelPlace(
    vertices.map(([a, b]): PlanePoint => [onto(a, 0), onto(b, 1)]),
    { x: range(window.x, 0), y: range(window.y, 1) },
  );
  return [Number(back(x, 0).toPrecision(4)), Number(back(y, 1).toPrecision(4))];
}

interface Outlines {
  readonly outlines: readonly (readonly PlanePoint[])[];
  readonly lines: readonly SchemeLine[];
  readonly ranges: readonly (readonly [number, number])[];
}

function outlinesOf(made: SchemeFile, frame: Frame, points: readonly SchemePoint[], fail: Fail): Outlines {
  const whole = made.fields.map(() => frame.x);
  switch (made.kind) {
    case 'polygons':
      return { outlines: made.fields.map(({ vertices }) => vertices!), lines: sharedEdges(made, frame), ranges: whole };
    case 'lines':
      return fieldsBetweenLines(made, frame, fail);
    case 'thresholds': {
      const levels = [frame.y[0], ...made.bounds, frame.y[1]];
      const [xa, xb] = frame.x;
      const outlines = made.fields.map((_, k): PlanePoint[] => [
        [xa, levels[k]],
        [xb, levels[k]],
        [xb, levels[k + 1]],
        [xa, levels[k + 1]],
      ]);
      const lines = made.bounds.map((y, k): SchemeLine => ({
        name: `${made.fields[k].name} | ${made.fields[k + 1].name}`,
        points: [
          [xa, y],
          [xb, y],
        ],
        published: true,
      }));
      return { outlines, lines, ranges: whole };
    }
    case 'criteria':
      return {
        outlines: made.fields.map(() => []),
        lines: [
          ...criterionLines(made, frame),
          ...made.lines.map((line): SchemeLine => ({ name: line.name, points: linePoints(line, made, fail), published: true })),
        ],
        ranges: whole,
      };
    case 'points':
      return { outlines: made.fields.map(() => []), lines: linesThroughPoints(made, frame, points, fail), ranges: whole };
  }
}

/** True where an edge lies on the frame or is listed as a convention of drawing. */
export function conventionTest(frame: Frame, conventionEdges: SchemeFile['conventionEdges']): (a: PlanePoint, b: PlanePoint) => boolean {
  const same = (a: PlanePoint, b: readonly number[]) => a[0] === b[0] && a[1] === b[1];
  return ([xa, ya], [xb, yb]) =>
    (xa === xb && (xa === frame.x[0] || xa === frame.x[1])) ||
    (ya === yb && (ya === frame.y[0] || ya === frame.y[1])) ||
    conventionEdges.some(([c, d]) => (same([xa, ya], c) && same([xb, yb], d)) || (same([xa, ya], d) && same([xb, yb], c)));
}

/** Every real edge of the fields once. */
function sharedEdges(made: SchemeFile, frame: Frame): readonly SchemeLine[] {
  const convention = conventionTest(frame, made.conventionEdges);
  const seen = new Map<string, { names: string[]; points: [PlanePoint, PlanePoint] }>();
  for (const { symbol, vertices } of made.fields) {
    vertices!.forEach((a, i) => {
      const b = vertices![(i + 1) % vertices!.length];
      if (convention(a, b)) return;
      const key = [a, b].map(String).sort().join(' ');
      const entry = seen.get(key);
      if (entry === undefined) seen.set(key, { names: [symbol], points: [a, b] });
      else entry.names.push(symbol);
    });
  }
  return [...seen.values()].map(({ names, points }) => ({ name: names.join(' | '), points, published: true }));
}

/** The points of a line, x ascending; a ternary one is read as per cent of the first two corners. */
function linePoints(line: SchemeFile['lines'][number], made: SchemeFile, fail: Fail): readonly PlanePoint[] {
  let points: PlanePoint[];
  if (line.curve !== undefined) {
    const { coefficients, of, from, to } = line.curve;
    points = Array.from({ length: curvePieces + 1 }, (_, i): PlanePoint => {
      const at = from + ((to - from) * i) / curvePieces;
      const value = coefficients.reduceRight((sum, coefficient) => sum * at + coefficient, 0);
      return of === 'x' ? [at, value] : [value, at];
    });
  } else if (line.points !== undefined) {
    points = line.points.map(([x, y, z]): PlanePoint => {
      if (made.plane === 'ternary' && (z === undefined || Math.abs(x + y + z - 100) > 0.11))
        fail(`line "${line.name}": a ternary point is three per cents that sum to 100, not ${[x, y, z].join(', ')}.`);
      return [x, y];
    });
  } else return fail(`line "${line.name}" needs points [[x, y], …] or a curve.`);
  if (points[0][0] > points[points.length - 1][0]) points.reverse();
  if (points.some(([x], i) => i > 0 && x <= points[i - 1][0])) fail(`line "${line.name}": x must ascend or descend all along the line.`);
  return points;
}

function fieldsBetweenLines(made: SchemeFile, frame: Frame, fail: Fail): Outlines {
  const given = made.lines.map((line) => linePoints(line, made, fail));
  const published = given.map((points, k): readonly [number, number] => {
    const [from, to] = made.lines[k].published ?? [points[0][0], points[points.length - 1][0]];
    return [from, to];
  });
  // A refused range is cut off; otherwise lines are continued straight to the frame.
  const [xa, xb] =
    made.beyond === 'refuse'
      ? [Math.max(frame.x[0], ...published.map(([from]) => from)), Math.min(frame.x[1], ...published.map(([, to]) => to))]
      : frame.x;
  const top = (x: number) => (made.plane === 'ternary' ? 100 - x : frame.y[1]);
  // A continued line may leave the frame before its side is reached: it bends there, and nowhere else.
  const leaves = given.flatMap((points) => [...meets(points, xa, xb, () => frame.y[0]), ...meets(points, xa, xb, top)]);
  const xs = [...new Set([xa, xb, ...given.flat().map(([x]) => x), ...leaves])].filter((x) => x >= xa && x <= xb).sort((a, b) => a - b);
  const levels = [
    xs.map((): number => frame.y[0]),
    ...given.map((points) => xs.map((x) => Math.min(top(x), Math.max(frame.y[0], polylineAt(points, x))))),
    xs.map(top),
  ];
  for (let k = 1; k < levels.length; k++) {
    const crossing = xs.findIndex((_, i) => levels[k][i] < levels[k - 1][i] - 1e-9);
    if (crossing >= 0) fail(`line ${k} lies below the one before it at x = ${xs[crossing]}; lines go from below upward and do not cross.`);
  }
  const outlines = made.fields.map((_, k) => {
    const lower = xs.map((x, i): PlanePoint => [x, levels[k][i]]);
    const upper = xs.map((x, i): PlanePoint => [x, levels[k + 1][i]]).reverse();
    return dropRepeats([...lower, ...upper]);
  });
  const lines = given.flatMap((points, k): SchemeLine[] => {
    const { name } = made.lines[k];
    const [from, to] = published[k];
    const piece = (a: number, b: number): PlanePoint[] => [
      [a, polylineAt(points, a)],
      ...points.filter(([x]) => x > a && x < b),
      [b, polylineAt(points, b)],
    ];
    const pieces: SchemeLine[] = [{ name, points: piece(Math.max(from, xa), Math.min(to, xb)), published: true }];
    if (from > xa) pieces.push({ name, points: piece(xa, from), published: false });
    if (to < xb) pieces.push({ name, points: piece(to, xb), published: false });
    return pieces;
  });
  const ranges = made.fields.map((_, k): readonly [number, number] => {
    const around = [published[k - 1], published[k]].filter((range) => range !== undefined);
    return [Math.max(...around.map(([from]) => from)), Math.min(...around.map(([, to]) => to))];
  });
  return { outlines, lines, ranges };
}

/** x at which a line, continued straight to xa and xb, meets another straight one. */
function meets(points: readonly PlanePoint[], xa: number, xb: number, other: (x: number) => number): number[] {
  const ends = [xa, ...points.map(([x]) => x).filter((x) => x > xa && x < xb), xb];
  return ends.slice(1).flatMap((to, i) => {
    const from = ends[i];
    const [above, below] = [polylineAt(points, from) - other(from), polylineAt(points, to) - other(to)];
    return above * below < 0 ? [from + ((to - from) * above) / (above - below)] : [];
  });
}

function dropRepeats(points: readonly PlanePoint[]): readonly PlanePoint[] {
  return points.filter(([x, y], i) => {
    const [px, py] = points[(i + points.length - 1) % points.length];
    return x !== px || y !== py;
  });
}

/** A criterion on a quantity that is an axis is drawn as a line across the window. */
function criterionLines(made: SchemeFile, { x, y }: Frame): readonly SchemeLine[] {
  const squeeze = (text: string) => text.replace(/\s+/g, '');
  return made.criteria.flatMap(({ expression, value }) =>
    [value].flat().flatMap((limit): SchemeLine[] => {
      if (squeeze(expression) === squeeze(made.axes[0].expression))
        return [
          {
            name: `${made.axes[0].title} ${limit}`,
            points: [
              [limit, y[0]],
              [limit, y[1]],
            ],
            published: true,
          },
        ];
      if (squeeze(expression) === squeeze(made.axes[1].expression))
        return [
          {
            name: `${made.axes[1].title} ${limit}`,
            points: [
              [x[0], limit],
              [x[1], limit],
            ],
            published: true,
          },
        ];
      return [];
    }),
  );
}

/** A reference point: given, or its coordinates computed from a reservoir of the reference tables. */
function schemePoint({ name, at, reservoir: key }: SchemeFile['points'][number], made: SchemeFile, fail: Fail): SchemePoint {
  if (at !== undefined) return { name, at };
  if (key === undefined) return fail(`the point "${name}" needs "at": [x, y] or a "reservoir".`);
  const columns = [...reservoir(key).values.values()].map(({ analyte, value, unit }) =>
    column({ symbol: analyte, values: [value], ...(unit === 'ratio' ? {} : { unit }) }),
  );
  const composition = suiteOf({ columns });
  const [x, y] = made.axes.map(({ expression }) => evaluate(composition, expression, { sigma: false }).values[0]);
  return { name, at: [x, y] };
}

/** Straight lines (on the axes' own scales) through two reference points, across the frame: derived, not published boundaries. */
function linesThroughPoints(made: SchemeFile, frame: Frame, points: readonly SchemePoint[], fail: Fail): readonly SchemeLine[] {
  return made.lines.map((line): SchemeLine => {
    if (line.through === undefined) return { name: line.name, points: linePoints(line, made, fail), published: true };
    const [first, second] = line.through.map(
      (name) => points.find((point) => point.name === name) ?? fail(`line "${line.name}": there is no point "${name}".`),
    );
    const on = (value: number, j: number) => (made.axes[j].scale === 'log' ? Math.log10(value) : value);
    const slope = (on(second.at[1], 1) - on(first.at[1], 1)) / (on(second.at[0], 0) - on(first.at[0], 0));
    const at = (x: number): PlanePoint => {
      const y = on(first.at[1], 1) + slope * (on(x, 0) - on(first.at[0], 0));
      return [x, made.axes[1].scale === 'log' ? 10 ** y : y];
    };
    return { name: line.name, points: [at(frame.x[0]), at(frame.x[1])], published: false };
  });
}
