import { findAnalyte } from '../chemistry';
import { showAs, type Showable, type TableCell, type TableView } from '../display';
import { cellState, resolveColumn, step, type Column, type Step, type Suite } from '../suite';
import { elementOrder } from '../tables';
import { checkCall } from './check-call';
import { censoredQuantiles } from './censored-quantiles';
import { referenceComposition, usualReferences, type CaesiumLeadChoice, type ReferenceComposition } from './reference';
import { shownCell } from './shown-cell';

/** How a normalised pattern is made. */
export interface PatternOptions {
  /** Key of an order in reference-tables/element-orders.csv, or your own list of symbols (default `rare-earths`). */
  readonly order?: string | readonly string[];
  /** What to divide by (default `chondrite-c1-1989` for the rare earths, else `primitive-mantle-1989`). */
  readonly reference?: ReferenceComposition;
  /** A label: one curve a group (median and quantile band) in place of one a sample. */
  readonly group?: string;
  /** Lower and upper quantile of the band of a group (default 0.25 and 0.75). */
  readonly band?: readonly [number, number];
  /**
   * Elements that no sample has: `bridge` keeps their place on the axis, `leave-out` drops it (default: `bridge` for the rare earths, else
   * `leave-out`). Either way they are listed in `absent`.
   */
  readonly absent?: 'bridge' | 'leave-out';
  /** Which Cs and Pb of the 1989 primitive mantle to divide by (default `plotting`). */
  readonly caesiumAndLead?: CaesiumLeadChoice;
}

/** One element of a pattern: a value a curve. */
export interface PatternElement {
  readonly element: string;
  /** What was divided by, in the element's canonical unit. */
  readonly divisor: number;
  /** Normalised value of each curve (by group: the median); NaN where there is none, and the state says why. */
  readonly values: Float64Array;
  /** One `cellState` a curve. */
  readonly states: Uint8Array;
  /** Normalised limit where below detection or above range; NaN elsewhere. */
  readonly limits: Float64Array;
  /** Normalised 1σ of each sample where it is known (by sample only). */
  readonly sigma?: Float64Array;
  /** Lower edge of a group's band (by group only); NaN where below-detection cells leave it open. */
  readonly low?: Float64Array;
  /** Upper edge of a group's band (by group only). */
  readonly high?: Float64Array;
  /** How many samples of each group have a value or a limit (by group only). */
  readonly counts?: Uint32Array;
}

/** Normalised patterns: curves (samples or groups) over elements in order. */
export interface PatternTable extends Showable {
  /** What one curve is. */
  readonly curve: 'sample' | 'group';
  /** The label that groups, when curves are groups. */
  readonly group?: string;
  /** Names of the curves: sample names or group names. */
  readonly names: readonly string[];
  /** Elements along the axis, in order. */
  readonly elements: readonly string[];
  /** One entry an element of the axis. */
  readonly normalised: readonly PatternElement[];
  /** Elements of the order that no sample has, or that the reference has no value of. */
  readonly absent: readonly string[];
  readonly order: string;
  readonly reference: string;
  /** The reference as a reader should see it on a figure. */
  readonly referenceName: string;
  readonly band: readonly [number, number];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/**
 * Normalised patterns of rare earths or of any elements in any order, by sample or by group.
 *
 * Each value is divided by the reference; a below-detection cell keeps its normalised limit and its state. By group, the value is the median
 * and the band lies between two quantiles; where below-detection cells reach into a quantile, the median becomes a limit (`below detection`)
 * and the band edge is NaN: nothing is replaced by half a detection limit.
 *
 * @param suite n samples
 * @param options `order`, `reference`, `group`, `band`, `absent`, `caesiumAndLead`
 * @returns one `PatternElement` an element, each with one value a curve (dimensionless)
 * @throws RangeError for an unknown order, reference, label, or band outside 0–1
 * @source Sun & McDonough 1989 (default references and order); other reservoirs by their own source
 * @example pattern(suite, { order: 'rare-earths', group: 'volcano' }).elements[0] // 'La'
 */
export function pattern(suite: Suite, options: PatternOptions = {}): PatternTable {
  checkCall('pattern', suite, options);
  const { order = 'rare-earths', group, band = [0.25, 0.75], caesiumAndLead } = options;
  const wanted = elementsOf(order);
  const isRareEarths = order === 'rare-earths';
  const absentChoice = options.absent ?? (isRareEarths ? 'bridge' : 'leave-out');
  if (absentChoice !== 'bridge' && absentChoice !== 'leave-out')
    throw new RangeError(`pattern: absent must be "bridge" or "leave-out", not "${String(absentChoice)}".`);
  if (!(Array.isArray(band) && band.length === 2 && band[0] >= 0 && band[0] <= band[1] && band[1] <= 1)) {
    throw new RangeError(`pattern: band must be two quantiles between 0 and 1, such as [0.25, 0.75], not ${JSON.stringify(band)}.`);
  }
  const from = options.reference ?? (isRareEarths ? usualReferences.rareEarths : usualReferences.multiElement);
  const reference = referenceComposition(from, { caesiumAndLead });
  const rowsByGroup = group === undefined ? undefined : groupRows(suite.label(group));

  const normalised: PatternElement[] = [];
  const noAnalysis: string[] = [];
  const noReference: string[] = [];
  for (const element of wanted) {
    const divisor = reference.valueOf(element);
    const found = resolveColumn(suite, element);
    const held = found !== undefined && !found.states.every((state) => state === cellState.missing);
    if (!held) noAnalysis.push(element);
    if (divisor === undefined) noReference.push(element);
    if (divisor === undefined || (!held && absentChoice === 'leave-out')) continue;
    normalised.push(
      rowsByGroup === undefined
        ? bySample(element, found, divisor, suite.size)
        : byGroup(element, found, divisor, rowsByGroup, band as [number, number]),
    );
  }
  const notes = [
    `Divided by ${reference.name}${reference.standings.length > 0 ? ` (values ${reference.standings.join(', ')})` : ''}.`,
    ...reference.notes,
    ...(noAnalysis.length > 0 ? [`In no sample: ${noAnalysis.join(', ')}.`] : []),
    ...(noReference.length > 0 ? [`Not in the reference: ${noReference.join(', ')}.`] : []),
    ...(group === undefined ? [] : [`Median and quantiles ${band[0]}–${band[1]} by ${group}.`]),
  ];
  const orderName = typeof order === 'string' ? order : 'own order';
  const lineage = [
    ...suite.lineage,
    step(
      'pattern',
      {
        order: orderName,
        elements: normalised.map(({ element }) => element),
        reference: reference.key,
        referenceStandings: reference.standings,
        caesiumAndLead: caesiumAndLead ?? 'plotting',
        absent: [...noAnalysis, ...noReference],
        ...(group === undefined ? {} : { group, band }),
      },
      {
        sources: [...new Set([...reference.sources, ...(typeof order === 'string' ? elementOrder(order).sources : [])])],
        tables: [...reference.tables, ...(typeof order === 'string' ? ['element-orders.csv'] : [])],
        fromMemory: reference.fromMemory(normalised.map(({ element }) => element)),
        says: `Element patterns are normalised to ${reference.name}.`,
      },
    ),
  ];
  const table: Omit<PatternTable, keyof Showable> = {
    curve: group === undefined ? 'sample' : 'group',
    ...(group === undefined ? {} : { group }),
    names: rowsByGroup === undefined ? suite.samples : [...rowsByGroup.keys()],
    elements: normalised.map(({ element }) => element),
    normalised,
    absent: [...new Set([...noAnalysis, ...noReference])],
    order: orderName,
    reference: reference.key,
    referenceName: reference.name,
    band: [band[0], band[1]],
    notes,
    lineage,
  };
  return showAs(table, patternView);
}

function elementsOf(order: string | readonly string[]): readonly string[] {
  if (typeof order === 'string') return elementOrder(order).elements;
  if (!Array.isArray(order) || order.length === 0)
    throw new RangeError('pattern: order is the key of an element order, or a list of symbols with at least one in it.');
  for (const symbol of order as readonly string[]) {
    if (findAnalyte(symbol) === undefined) throw new RangeError(`pattern: "${symbol}" in order is not an analyte that the library knows.`);
  }
  return order as readonly string[];
}

function groupRows(labels: readonly string[]): ReadonlyMap<string, number[]> {
  const rows = new Map<string, number[]>();
  labels.forEach((text, i) => {
    const known = rows.get(text);
    if (known === undefined) rows.set(text, [i]);
    else known.push(i);
  });
  return rows;
}

function bySample(element: string, found: Column | undefined, divisor: number, size: number): PatternElement {
  const values = new Float64Array(size).fill(NaN);
  const limits = new Float64Array(size).fill(NaN);
  const states = new Uint8Array(size).fill(cellState.missing);
  if (found === undefined) return { element, divisor, values, states, limits };
  const factor = 1 / divisor;
  for (let i = 0; i < size; i++) values[i] = found.values[i] * factor;
  if (found.limits !== undefined) for (let i = 0; i < size; i++) limits[i] = found.limits[i] * factor;
  for (let i = 0; i < size; i++) states[i] = found.states[i] === cellState.measured ? cellState.derived : found.states[i];
  return { element, divisor, values, states, limits, ...(found.sigma === undefined ? {} : { sigma: found.sigma.map((sigma) => sigma * factor) }) };
}

function byGroup(
  element: string,
  found: Column | undefined,
  divisor: number,
  groups: ReadonlyMap<string, readonly number[]>,
  band: readonly [number, number],
): PatternElement {
  const blank = () => new Float64Array(groups.size).fill(NaN);
  const values = blank();
  const limits = blank();
  const low = blank();
  const high = blank();
  const counts = new Uint32Array(groups.size);
  const states = new Uint8Array(groups.size).fill(cellState.missing);
  let g = 0;
  for (const rows of groups.values()) {
    if (found !== undefined) {
      const { count, quantiles } = censoredQuantiles(found, rows, [band[0], 0.5, band[1]]);
      counts[g] = count;
      const [lower, median, upper] = quantiles;
      if (count > 0) {
        const known = median.low === median.high;
        states[g] = known
          ? cellState.derived
          : Number.isFinite(median.high)
            ? cellState.belowDetection
            : median.low > 0
              ? cellState.aboveRange
              : cellState.missing;
        if (known) values[g] = median.high / divisor;
        else if (states[g] !== cellState.missing) limits[g] = (states[g] === cellState.belowDetection ? median.high : median.low) / divisor;
        if (lower.low === lower.high) low[g] = lower.low / divisor;
        if (upper.low === upper.high) high[g] = upper.high / divisor;
      }
    }
    g++;
  }
  return { element, divisor, values, states, limits, low, high, counts };
}

function patternView(table: Omit<PatternTable, keyof Showable>): TableView {
  const shown = Math.min(table.names.length, 60);
  const rows = Array.from({ length: shown }, (_, i): TableCell[] => [
    table.names[i],
    ...table.normalised.map(({ values, states, limits }) => shownCell(values, states, limits, i)),
  ]);
  return {
    title: `Normalised to ${table.referenceName}`,
    columns: [table.group ?? 'sample', ...table.elements],
    rows,
    totalRows: table.names.length,
    notes: table.notes,
  };
}
