import { findAnalyte } from '../chemistry';
import { resolveColumn, type Suite } from '../suite';
import { isotopeElement } from './isotopes';
import { amountOf, joinLineage, oneAnalysis, type Composition } from './one-analysis';
import { buildPath, evenly, type ModelPath } from './path';
import { readSteps } from './trace-setup';

/** What `mix` takes. */
export interface MixOptions {
  /** Two or three analyses. */
  readonly components: readonly Composition[];
  /** Names of the components, for the columns of shares (default: their sample names). */
  readonly names?: readonly string[];
  /** Analytes to mix (default: every oxide, element and isotope ratio that all components hold). */
  readonly analytes?: readonly string[];
  /** Steps along each edge (default 20). */
  readonly steps?: number;
}

function nameComponents(components: readonly Suite[], names: readonly string[] | undefined, who: string): readonly string[] {
  if (names !== undefined) {
    if (!Array.isArray(names) || names.length !== components.length || new Set(names).size !== names.length)
      throw new RangeError(`${who}: names must hold ${components.length} different names.`);
    return names;
  }
  const found = components.map((each) => each.samples[0]);
  return new Set(found).size === found.length ? found : components.map((_, i) => `component ${i + 1}`);
}

function chooseAnalytes(components: readonly Suite[], wanted: readonly string[] | undefined, who: string, notes: string[]): readonly string[] {
  const usable = (symbol: string) => components.every((each) => Number.isFinite(amountOf(each, symbol)));
  const mixable = (symbol: string) => {
    const kind = findAnalyte(symbol)?.kind;
    return kind === 'oxide' || kind === 'element' || isotopeElement(symbol) !== undefined;
  };
  if (wanted !== undefined) {
    for (const symbol of wanted) {
      if (!mixable(symbol))
        throw new RangeError(
          `${who}: analytes holds "${String(symbol)}", which does not mix by mass; mix its parts and take the ratio of the result.`,
        );
      if (!usable(symbol)) throw new RangeError(`${who}: not every component has a usable value of ${symbol}.`);
    }
    return wanted;
  }
  const all = [...new Set(components.flatMap((each) => each.analytes))].filter(mixable);
  const left = all.filter((symbol) => !usable(symbol));
  if (left.length > 0) notes.push(`Not mixed, because a component has no usable value: ${left.join(', ')}.`);
  const kept = all.filter(usable);
  if (kept.length === 0) throw new RangeError(`${who}: the components share no analyte with a usable value.`);
  return kept;
}

/** Shares of the components, row by row: along the edge of two, or over the triangle of three. */
function sharesOf(count: number, steps: number): readonly Float64Array[] {
  const along = evenly(0, 1, steps);
  if (count === 2) return [along.map((share) => 1 - share), along];
  const rows: [number, number, number][] = [];
  for (let i = 0; i <= steps; i++) for (let j = 0; j <= steps - i; j++) rows.push([(steps - i - j) / steps, j / steps, i / steps]);
  return [0, 1, 2].map((k) => Float64Array.from(rows, (row) => row[k]));
}

/**
 * Mixtures of two or three compositions: oxides and elements by mass, isotope ratios weighted by their element.
 *
 * @param options `components` two or three analyses (oxides wt %, elements ppm); `names`; `analytes`; `steps` along an edge (default 20)
 * @returns the path: with two components F is the share of the second (0–1, steps + 1 rows); with three the rows cover the triangle
 *   ((steps + 1)(steps + 2)/2 rows) and F is the share of the third. The liquid holds a quantity `share of …` for each component
 * @throws RangeError naming the analyte or component
 * @source Langmuir et al. 1978
 * @example mix({ components: [{ Sr: 600, '87Sr/86Sr': 0.7033 }, { Sr: 150, '87Sr/86Sr': 0.715 }] }).liquid.values('87Sr/86Sr')
 */
export function mix(options: MixOptions): ModelPath {
  const who = 'mix';
  if (!Array.isArray(options?.components) || options.components.length < 2 || options.components.length > 3)
    throw new RangeError(`${who}: components must hold two or three analyses.`);
  const components = options.components.map((each, i) => oneAnalysis(each, who, `components[${i}]`));
  const names = nameComponents(components, options.names, who);
  const notes: string[] = [];
  const analytes = chooseAnalytes(components, options.analytes, who, notes);
  const weightless = analytes.filter((symbol) => {
    const element = isotopeElement(symbol);
    return element !== undefined && !components.every((each) => (resolveColumn(each, element)?.values[0] ?? NaN) >= 0);
  });
  if (weightless.length > 0)
    throw new RangeError(
      `${who}: ${weightless.join(', ')} cannot be mixed without ` +
        `${[...new Set(weightless.map((symbol) => isotopeElement(symbol)))].join(', ')} in every component.`,
    );
  const shares = sharesOf(components.length, readSteps(options.steps, who, 20));
  const size = shares[0].length;
  const liquid = new Map<string, Float64Array>();
  for (const symbol of analytes) {
    const element = isotopeElement(symbol);
    const values = new Float64Array(size);
    for (let i = 0; i < size; i++) {
      let [sum, weight] = [0, 0];
      for (let k = 0; k < components.length; k++) {
        const part = shares[k][i] * (element === undefined ? 1 : amountOf(components[k], element));
        sum += part * amountOf(components[k], symbol);
        weight += part;
      }
      values[i] = sum / weight;
    }
    liquid.set(symbol, values);
  }
  const last = components.length - 1;
  return buildPath({
    who,
    process: components.length === 2 ? 'Mixing of two' : 'Mixing of three',
    F: shares[last].slice(),
    meaning: `share of ${names[last]}`,
    liquid,
    quantities: new Map(names.map((name, k) => [`share of ${name}`, { unit: '', values: shares[k] }])),
    coefficients: [],
    notes,
    lineage: joinLineage(...components.map((each) => each.lineage)),
    detail: { components: [...names], analytes: [...analytes] },
    sources: ['langmuir_1978'],
  });
}

/** The hyperbola on which two-component mixtures of two ratios lie: A·x + B·x·y + C·y + D = 0. */
export interface MixingHyperbola {
  readonly A: number;
  readonly B: number;
  readonly C: number;
  readonly D: number;
  /** (a/b of the first)/(a/b of the second), a and b the denominators of y and x; 1 is a straight line. */
  readonly curvature: number;
}

/** One end member of a mixing hyperbola: the two ratios, and the concentration of each ratio's denominator. */
export interface MixingEnd {
  readonly x: number;
  readonly y: number;
  /** Denominator of x. */
  readonly b: number;
  /** Denominator of y. */
  readonly a: number;
}

/**
 * The mixing hyperbola through two end members.
 *
 * @param first, second ratios x and y with the concentration of their denominators, b (of x) and a (of y), each in one unit
 * @returns the coefficients, and the curvature (1 is a straight line)
 * @throws RangeError for a number that is not finite
 * @source Langmuir et al. 1978
 */
export function mixingHyperbola(first: MixingEnd, second: MixingEnd): MixingHyperbola {
  for (const [name, end] of [
    ['first', first],
    ['second', second],
  ] as const) {
    for (const key of ['x', 'y', 'a', 'b'] as const)
      if (!Number.isFinite(end?.[key])) throw new RangeError(`mixingHyperbola: ${name}.${key} is ${String(end?.[key])}; give a number.`);
  }
  const [a1, b1, x1, y1] = [first.a, first.b, first.x, first.y];
  const [a2, b2, x2, y2] = [second.a, second.b, second.x, second.y];
  return {
    A: a2 * b1 * y2 - a1 * b2 * y1,
    B: a1 * b2 - a2 * b1,
    C: a2 * b1 * x1 - a1 * b2 * x2,
    D: a1 * b2 * x2 * y1 - a2 * b1 * x1 * y2,
    curvature: (a1 * b2) / (a2 * b1),
  };
}
