import { referenceComposition, type ReferenceComposition } from './reference';

/** The array of unmodified oceanic basalts in log(M/Yb) against log(Nb/Yb): log10(M/Yb) = intercept + slope · log10(Nb/Yb). */
export interface ArrayLine {
  readonly element: string;
  readonly slope: number;
  readonly intercept: number;
  /** How far other oceanic basalts lie off the line: 1σ in log10 units. */
  readonly scatter: number;
}

/** The two basalts that a line is drawn through, and those that tell its scatter. */
export interface ArrayOptions {
  /** Depleted and enriched end of the array (default N-MORB and OIB, both 1989). */
  readonly through?: readonly [ReferenceComposition, ReferenceComposition];
  /** Other oceanic basalts, whose distance from the line is its scatter (default E-MORB 1989 and the mean of all MORB 2013). */
  readonly others?: readonly ReferenceComposition[];
}

/** No array is known better than this (log10 units): about 7 %. */
const leastScatter = 0.03;

const defaults = { through: ['n-morb-1989', 'oib-1989'], others: ['e-morb-1989', 'all-morb-2013'] } as const;

/**
 * The line of the oceanic-basalt array for one element, through two reference basalts. Published edges of the array are not used: the axis
 * is drawn through tabled compositions, so that a reader can draw it again.
 *
 * @param element e.g. `Th`
 * @param options `through`, `others`
 * @returns slope and intercept (log10), and scatter; undefined when a reference lacks the element, Nb or Yb
 * @source Sun & McDonough 1989 (compositions); Pearce 2008 (the plot)
 * @example mantleArray('Th')?.slope // 1.143
 */
export function mantleArray(element: string, options: ArrayOptions = {}): ArrayLine | undefined {
  const { through = defaults.through, others = defaults.others } = options;
  if (!Array.isArray(through) || through.length !== 2) throw new RangeError('mantleArray: through must hold two reference compositions.');
  const point = (from: ReferenceComposition): readonly [number, number] | undefined => {
    const { valueOf } = referenceComposition(from);
    const [m, nb, yb] = [element, 'Nb', 'Yb'].map(valueOf);
    return m === undefined || nb === undefined || yb === undefined ? undefined : [Math.log10(nb / yb), Math.log10(m / yb)];
  };
  const [first, second] = through.map(point);
  if (first === undefined || second === undefined) return undefined;
  const slope = (second[1] - first[1]) / (second[0] - first[0]);
  const intercept = first[1] - slope * first[0];
  const misses = others
    .map(point)
    .filter((each) => each !== undefined)
    .map(([x, y]) => y - intercept - slope * x);
  const scatter = misses.length === 0 ? 0 : Math.sqrt(misses.reduce((sum, miss) => sum + miss * miss, 0) / misses.length);
  return { element, slope, intercept, scatter: Math.max(leastScatter, scatter) };
}

/** What arrays of these elements rest on, for a lineage. */
export function arrayBasis(
  elements: readonly string[],
  options: ArrayOptions = {},
): { readonly sources: readonly string[]; readonly fromMemory: readonly string[] } {
  const { through = defaults.through, others = defaults.others } = options;
  const references = [...through, ...others].map((each: ReferenceComposition) => referenceComposition(each));
  return {
    sources: [...new Set(references.flatMap(({ sources }) => sources))],
    fromMemory: references.flatMap(({ fromMemory }) => fromMemory([...elements, 'Nb', 'Yb'])),
  };
}
