import { showAs, type Showable, type TableCell, type TableView } from '../display';
import { cellState, derivedColumn, resolveColumn, step, type Column, type Step, type Suite } from '../suite';
import { checkCall } from './check-call';
import { applyFilter, basaltFilter, type SampleFilter } from './basalt-filter';
import { medianError, quantileOfSorted } from './censored-quantiles';
import { arrayBasis, mantleArray, type ArrayLine, type ArrayOptions } from './mantle-array';
import { shownCell } from './shown-cell';

/** How slab shares are computed. */
export interface SlabShareOptions extends ArrayOptions {
  /** Elements (default: those of `slabShareElements` that the suite has). */
  readonly elements?: readonly string[];
  /** Which samples count: ranges by column, or `none` (default: MgO from 4 wt %, LOI to 4 wt %). */
  readonly filter?: SampleFilter | 'none';
  /** A label: medians by group are added to the table. */
  readonly group?: string;
}

/** One group's median slab share of each element. */
export interface GroupShare {
  readonly name: string;
  readonly samples: number;
  /** Median in percent, one an element; NaN where no sample of the group has it. */
  readonly median: Float64Array;
  /** 1σ of the median: scatter over √n and the scatter of the array together, in percent. */
  readonly sigma: Float64Array;
}

/** The slab-derived share of each element in each sample. */
export interface SlabShares extends Showable {
  readonly samples: readonly string[];
  readonly elements: readonly string[];
  /** By element: percent of the element that is slab-derived (n), with states, limits and 1σ. Samples left out are missing. */
  readonly shares: ReadonlyMap<string, Column>;
  /** The line that each baseline is read from. */
  readonly arrays: ReadonlyMap<string, ArrayLine>;
  /** 1 for each sample that passed the filter. */
  readonly kept: Uint8Array;
  readonly group?: string;
  readonly groups: readonly GroupShare[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** Elements in order of falling mobility from the slab (Pearce & Peate 1995, from memory), as far as the array knows them. */
export const slabShareElements: readonly string[] = [
  'Cs',
  'Rb',
  'Ba',
  'Pb',
  'Sr',
  'K',
  'U',
  'Th',
  'La',
  'Ce',
  'Pr',
  'P',
  'Nd',
  'Sm',
  'Eu',
  'Zr',
  'Hf',
  'Gd',
  'Ti',
  'Y',
];

/**
 * The slab share of each element: its excess over what the mantle alone would give at the sample's Nb/Yb.
 *
 * The baseline is the oceanic-basalt array, log10(M/Yb) = a + b·log10(Nb/Yb); share = 100·(1 − baseline/(M/Yb)) percent. 0 is a mantle without
 * slab input; a share below 0 is a sample depleted in M against the array. It takes Nb and Yb as coming from the mantle alone: where
 * sediment melt carries Nb, shares are minima. 1σ: analyses and the scatter of the array, added in quadrature.
 *
 * @param suite n samples with Nb, Yb and other trace elements (ppm), MgO and LOI (wt %) for the filter
 * @param options `elements`, `filter`, `group`, `through` and `others` of the array
 * @returns by element a column of percent (n); below-detection M gives an upper limit, below-detection Nb a lower one
 * @throws RangeError when Nb or Yb is lacking, or an element has no array
 * @source Pearce & Peate 1995; Pearce et al. 2005 (both from memory)
 * @example slabShares(suite, { group: 'volcano' }).shares.get('Ba').values
 */
export function slabShares(suite: Suite, options: SlabShareOptions = {}): SlabShares {
  checkCall('slabShares', suite, options);
  const { filter = basaltFilter, group, through, others } = options;
  const wanted = options.elements ?? slabShareElements.filter((element) => resolveColumn(suite, element) !== undefined);
  const needed = ['Nb', 'Yb', ...(options.elements ?? [])].filter((element) => resolveColumn(suite, element) === undefined);
  if (needed.length > 0)
    throw new RangeError(`slabShares needs ${needed.join(', ')}, which this suite does not hold. It holds: ${suite.analytes.join(', ')}.`);
  const niobium = resolveColumn(suite, 'Nb')!;
  const ytterbium = resolveColumn(suite, 'Yb')!;
  const outcome = applyFilter('slabShares', suite, filter);
  const shares = new Map<string, Column>();
  const arrays = new Map<string, ArrayLine>();
  const noArray: string[] = [];
  for (const element of wanted) {
    const line = element === 'Nb' || element === 'Yb' ? undefined : mantleArray(element, { through, others });
    if (line === undefined) {
      noArray.push(element);
      continue;
    }
    arrays.set(element, line);
    shares.set(element, shareColumn(resolveColumn(suite, element)!, niobium, ytterbium, line, outcome.kept));
  }
  if (noArray.length > 0 && options.elements !== undefined)
    throw new RangeError(`slabShares: no oceanic-basalt array for ${noArray.join(', ')}; leave them out of elements.`);

  const groups = group === undefined ? [] : groupShares(suite.label(group), shares, arrays, outcome.kept);
  const notes = [
    `${outcome.keptCount} of ${suite.size} samples counted.`,
    ...outcome.notes,
    'Baseline: line through N-MORB and OIB (or those chosen) in log(M/Yb) against log(Nb/Yb); reference values from memory where the table says so.',
  ];
  const detail = {
    elements: [...shares.keys()],
    filter: filter === 'none' ? filter : Object.fromEntries(Object.entries(filter).map(([name, { from, to }]) => [name, [from ?? null, to ?? null]])),
    counted: outcome.keptCount,
    rows: suite.size,
    ...(group === undefined ? {} : { group }),
    arrays: Object.fromEntries([...arrays].map(([element, { slope, intercept, scatter }]) => [element, [slope, intercept, scatter]])),
  };
  const says = `The slab-derived share of ${[...shares.keys()].join(', ')} is the excess over the oceanic-basalt array at the sample's Nb/Yb.`;
  const basis = arrayBasis([...shares.keys()], { through, others });
  const because = step('slabShares', detail, {
    sources: ['pearce_peate_1995', 'pearce_2005', ...basis.sources],
    tables: ['reservoirs.csv'],
    fromMemory: basis.fromMemory,
    says,
  });
  const result = {
    samples: suite.samples,
    elements: [...shares.keys()],
    shares,
    arrays,
    kept: outcome.kept,
    ...(group === undefined ? {} : { group }),
    groups,
    notes,
    lineage: [...suite.lineage, because],
  };
  return showAs(result, shareView);
}

/** S = 100·(1 − 10^a·Nb^b·Yb^(1−b)/M); dS = 100·B·√[(b·dNb/Nb)² + ((1−b)·dYb/Yb)² + (dM/M)² + (ln10·scatter)²], B = baseline/M. */
function shareColumn(of: Column, niobium: Column, ytterbium: Column, line: ArrayLine, kept: Uint8Array): Column {
  const size = of.values.length;
  const values = new Float64Array(size).fill(NaN);
  const sigma = new Float64Array(size).fill(NaN);
  let limits: Float64Array | undefined;
  const bounded: number[] = [];
  const { slope, intercept, scatter } = line;
  const factor = 10 ** intercept;
  const arrayVariance = (Math.LN10 * scatter) ** 2;
  const relative = (column: Column, i: number): number =>
    column.sigma === undefined || Number.isNaN(column.sigma[i]) ? 0 : column.sigma[i] / column.values[i];
  for (let i = 0; i < size; i++) {
    if (kept[i] === 0) continue;
    const nb = niobium.values[i];
    const yb = ytterbium.values[i];
    const m = of.values[i];
    if (m > 0 && nb > 0 && yb > 0) {
      const part = (factor * yb * (nb / yb) ** slope) / m;
      values[i] = 100 * (1 - part);
      sigma[i] =
        100 *
        part *
        Math.sqrt((slope * relative(niobium, i)) ** 2 + ((1 - slope) * relative(ytterbium, i)) ** 2 + relative(of, i) ** 2 + arrayVariance);
      continue;
    }
    // One censored value bounds the share; two leave it open.
    const lowM = of.states[i] === cellState.belowDetection && nb > 0 && yb > 0;
    const lowNb = niobium.states[i] === cellState.belowDetection && m > 0 && yb > 0;
    const [useM, useNb] = [lowM ? (of.limits?.[i] ?? NaN) : m, lowNb ? (niobium.limits?.[i] ?? NaN) : nb];
    const bound = 100 * (1 - (factor * yb * (useNb / yb) ** slope) / useM);
    if ((lowM || lowNb) && Number.isFinite(bound)) {
      limits ??= new Float64Array(size).fill(NaN);
      limits[i] = bound;
      bounded.push(i, lowM ? cellState.belowDetection : cellState.aboveRange);
    }
  }
  const column = derivedColumn(of.symbol, values, '%', sigma);
  for (let b = 0; b < bounded.length; b += 2) column.states[bounded[b]] = bounded[b + 1];
  return limits === undefined ? column : { ...column, limits };
}

function groupShares(
  labels: readonly string[],
  shares: ReadonlyMap<string, Column>,
  arrays: ReadonlyMap<string, ArrayLine>,
  kept: Uint8Array,
): GroupShare[] {
  const rows = new Map<string, number[]>();
  labels.forEach((text, i) => {
    if (!rows.has(text)) rows.set(text, []);
    if (kept[i] === 1) rows.get(text)!.push(i);
  });
  return [...rows]
    .filter(([, members]) => members.length > 0)
    .map(([name, members]) => {
      const median = new Float64Array(shares.size).fill(NaN);
      const sigma = new Float64Array(shares.size).fill(NaN);
      [...shares].forEach(([element, { values }], e) => {
        const known = members
          .map((i) => values[i])
          .filter((value) => !Number.isNaN(value))
          .sort((a, b) => a - b);
        if (known.length === 0) return;
        const middle = quantileOfSorted(known, 0.5);
        median[e] = middle;
        sigma[e] = Math.hypot(medianError(known.map((value) => Math.abs(value - middle))), (100 - middle) * Math.LN10 * arrays.get(element)!.scatter);
      });
      return { name, samples: members.length, median, sigma };
    });
}

function shareView(result: Omit<SlabShares, keyof Showable>): TableView {
  const { elements, shares, groups, notes, samples, kept } = result;
  const whole = (value: number) => (Number.isNaN(value) ? '' : String(Math.round(value)));
  if (groups.length > 0) {
    return {
      title: 'Slab-derived share by element (%, median ± 1σ)',
      columns: [result.group ?? 'group', 'samples', ...elements],
      rows: groups.map(({ name, samples: count, median, sigma }) => [
        name,
        count,
        ...elements.map((_, e) => (Number.isNaN(median[e]) ? '' : `${whole(median[e])} ± ${whole(sigma[e])}`)),
      ]),
      notes,
    };
  }
  const rows: TableCell[][] = [];
  for (let i = 0; i < samples.length && rows.length < 60; i++) {
    if (kept[i] === 0) continue;
    rows.push([
      samples[i],
      ...elements.map((element) => {
        const { values, states, limits, sigma } = shares.get(element)!;
        return Number.isNaN(values[i]) ? shownCell(values, states, limits, i) : `${whole(values[i])} ± ${whole(sigma![i])}`;
      }),
    ]);
  }
  return {
    title: 'Slab-derived share by element (% ± 1σ)',
    columns: ['sample', ...elements],
    rows,
    totalRows: kept.reduce((sum, each) => sum + each, 0),
    notes,
  };
}
