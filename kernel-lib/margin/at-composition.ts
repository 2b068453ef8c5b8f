import { showAs, type Showable } from '../display';
import { evaluate, step, type Step, type Suite } from '../suite';
import { reservoir } from '../tables';
import { medianOf, quantileOf, randomSource, robustLine, robustSpread, type RobustMethod } from './regression';
import { round } from './slab-below';

/** Regression of one quantity to a fixed value of another within a window. */
export interface AtComposition {
  /** The index that analyses are brought to: `SiO2`, `MgO`. */
  readonly index: string;
  /** Its value, in its unit: 60 for K60. */
  readonly value: number;
  /** Samples outside this range of the index are not used. */
  readonly window: readonly [number, number];
}

/** One group's value, with its error. */
export interface ArcValue {
  readonly group: string;
  readonly value: number;
  /** 1σ by bootstrap of the group's samples; NaN for fewer than three. */
  readonly sigma: number;
  /** Samples used, and samples the group has. */
  readonly used: number;
  readonly of: number;
  /** Slope of the quantity on the index, with a regression. */
  readonly slope?: number;
  /** Range of the index among the samples used. */
  readonly from?: number;
  readonly to?: number;
  /** Why there is no value, or what to mind about it. */
  readonly note: string;
}

export interface ArcValues {
  readonly of: string;
  readonly unit: string;
  readonly by: string;
  readonly at?: AtComposition;
  readonly groups: readonly ArcValue[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** How groups are brought to one value each. */
export interface ArcValueOptions {
  /** Quantity or expression: `K2O`, `Ba/Th`, `(La/Sm)N`. */
  readonly of: string;
  /** Label that groups the samples (default `volcano`). */
  readonly by?: string;
  /** Regress to a composition (default: the median of the group). */
  readonly at?: AtComposition;
  /** `theil-sen` (default) or `huber`. */
  readonly method?: RobustMethod;
  /** Fewest samples of a group for a value (default 5 with a regression, 3 for a median). */
  readonly minimum?: number;
  /** Reservoir that normalised values are divided by (default `chondrite-c1-1989`). */
  readonly reference?: string;
  /** Seed of the bootstrap (default 1967). */
  readonly seed?: number;
}

/** @internal A group's samples, kept so that a bootstrap can draw from them. */
export interface GroupSamples {
  readonly group: string;
  readonly index?: Float64Array;
  readonly values: Float64Array;
  readonly rows: readonly number[];
}

/** Ready-made choices of the trade. */
const presets = {
  K60: { of: 'K2O', at: { index: 'SiO2', value: 60, window: [55, 65] } },
  'K57.5': { of: 'K2O', at: { index: 'SiO2', value: 57.5, window: [52.5, 62.5] } },
  K55: { of: 'K2O', at: { index: 'SiO2', value: 55, window: [50, 60] } },
  'Na6.0': { of: 'Na2O', at: { index: 'MgO', value: 6, window: [4, 8] } },
  'Ca6.0': { of: 'CaO', at: { index: 'MgO', value: 6, window: [4, 8] } },
} as const satisfies Record<string, { of: string; at: AtComposition }>;

/** K2O at 60, 57.5 and 55 % SiO2; Na2O and CaO at 6 % MgO. */
export type CompositionIndex = keyof typeof presets;

/** @internal The regression behind a ready-made index. */
export function compositionIndex(name: CompositionIndex): { of: string; at: AtComposition } {
  if (!Object.hasOwn(presets, name))
    throw new RangeError(
      `There is no index "${String(name)}". There are: ${Object.keys(presets).join(', ')}; or give { of, at: { index, value, window } }.`,
    );
  return presets[name];
}

/**
 * One value a volcano: the median of a quantity, or the quantity regressed to a fixed composition within a window, as K2O at 60 % SiO2.
 *
 * Samples outside the window, without a usable value, or below detection are not used, and counted. The line is robust (Theil–Sen, or Huber) and
 * its 1σ is a seeded bootstrap of the volcano's samples. A value that lies outside the range of the samples is marked as extrapolated. Put the suite
 * on a volatile-free basis first.
 *
 * @param suite n samples
 * @param options `of`, or a ready-made index: `K60`, `K57.5`, `K55`, `Na6.0`, `Ca6.0`; see ArcValueOptions
 * @returns a value, 1σ and count for each group, in order of first appearance
 * @throws RangeError for an unknown label, index, method or reference; ExpressionError for a quantity that the suite lacks
 * @source Dickinson 1975 (K2O at one silica); Plank & Langmuir 1988 (Na and Ca at 6 % MgO); Theil 1950; Sen 1968; Efron 1979
 * @example atComposition(dry, 'K60').groups
 */
export function atComposition(suite: Suite, options: CompositionIndex | ArcValueOptions): ArcValues & Showable {
  const wanted: ArcValueOptions = typeof options === 'string' ? compositionIndex(options) : options;
  const { samples, unit, notes } = gatherGroups(suite, wanted);
  const { of, by = 'volcano', at, method = 'theil-sen', seed = 1967 } = wanted;
  const draw = randomSource(seed);
  const groups = samples.map((each) => describe(each, wanted, draw));
  if (at !== undefined && !suite.has('SumAsGiven')) notes.push('The suite is not on a volatile-free basis: see volatileFree.');
  const sources = [
    'theil_1950',
    'sen_1968',
    'efron_1979',
    ...(method === 'huber' ? ['huber_1964'] : []),
    ...(at?.index === 'MgO' ? ['plank_langmuir_1988'] : at?.index === 'SiO2' ? ['dickinson_1975'] : []),
  ];
  const result: ArcValues = {
    of,
    unit,
    by,
    ...(at === undefined ? {} : { at }),
    groups,
    notes,
    lineage: [
      ...suite.lineage,
      step(
        'atComposition',
        { of, by, at: at === undefined ? null : { index: at.index, value: at.value, window: [...at.window] }, method, seed, groups: groups.length },
        {
          sources,
          says:
            at === undefined
              ? ''
              : `${of} was brought to ${at.value} % ${at.index} by a robust line through the samples of each ${by} within ` +
                `${at.window[0]}–${at.window[1]} %.`,
        },
      ),
    ],
  };
  const what = at === undefined ? `Median ${of}` : `${of} at ${at.value} ${at.index}`;
  return showAs(result, () => ({
    title: `${what} by ${by}${unit === '' ? '' : ` (${unit})`}`,
    columns: [by, what, '1σ', 'samples used', 'of', ...(at === undefined ? [] : ['slope', `${at.index} from`, `${at.index} to`]), 'note'],
    rows: groups.map((g) => [
      g.group,
      significant(g.value),
      significant(g.sigma),
      g.used,
      g.of,
      ...(at === undefined ? [] : [significant(g.slope ?? NaN), round(g.from ?? NaN, 2), round(g.to ?? NaN, 2)]),
      g.note,
    ]),
    notes,
  }));
}

const significant = (value: number): number => (Number.isFinite(value) ? Number(value.toPrecision(4)) : NaN);

/** @internal The samples of each group that a value may be drawn from. */
export function gatherGroups(
  suite: Suite,
  options: ArcValueOptions,
): { readonly samples: GroupSamples[]; readonly unit: string; readonly notes: string[] } {
  const { of, by = 'volcano', at, method = 'theil-sen', reference = 'chondrite-c1-1989' } = options ?? {};
  if (typeof of !== 'string')
    throw new RangeError('atComposition: give { of } as a quantity or an expression, such as "K2O" or "Ba/Th", or a ready-made index such as "K60".');
  if (method !== 'theil-sen' && method !== 'huber')
    throw new RangeError(`atComposition: method must be "theil-sen" or "huber", not "${String(method)}".`);
  const composition = reservoir(reference);
  const chondrite = (symbol: string) => composition.values.get(symbol)?.value ?? NaN;
  const quantity = evaluate(suite, of, { reference: chondrite });
  if (at !== undefined && !(at.window?.length === 2 && at.window[0] < at.window[1] && Number.isFinite(at.value))) {
    throw new RangeError(
      'atComposition: at needs an index, a value and a window [from, to] of the index, such as { index: "SiO2", value: 60, window: [55, 65] }.',
    );
  }
  const index = at === undefined ? undefined : evaluate(suite, at.index, { reference: chondrite }).values;
  const names = suite.label(by);
  const groups = new Map<string, number[]>();
  names.forEach((name, i) => {
    if (name === '') return;
    const rows = groups.get(name);
    if (rows === undefined) groups.set(name, [i]);
    else rows.push(i);
  });
  const blank = names.filter((name) => name === '').length;
  const samples = [...groups].map(([group, rows]): GroupSamples => {
    const kept = rows.filter(
      (i) => Number.isFinite(quantity.values[i]) && (index === undefined || (index[i] >= at!.window[0] && index[i] <= at!.window[1])),
    );
    return {
      group,
      rows,
      values: Float64Array.from(kept, (i) => quantity.values[i]),
      ...(index === undefined ? {} : { index: Float64Array.from(kept, (i) => index[i]) }),
    };
  });
  return { samples, unit: quantity.unit, notes: blank === 0 ? [] : [`${blank} samples have no ${by} and are not used.`] };
}

/** @internal Value of a group's samples, or of a draw from them. */
export function groupValue(values: Float64Array, index: Float64Array | undefined, at: AtComposition | undefined, method: RobustMethod): number {
  if (index === undefined || at === undefined) return medianOf(values);
  const { slope, intercept } = robustLine(method, index, values);
  return intercept + slope * at.value;
}

/** @internal Fewest samples of a group. */
export const fewest = (options: ArcValueOptions): number => options.minimum ?? (options.at === undefined ? 3 : 5);

/** @internal Values of a group under re-sampling of its samples. */
export function resampledValues(samples: GroupSamples, options: ArcValueOptions, draw: () => number, times: number): Float64Array {
  const { values, index } = samples;
  const n = values.length;
  const pickedValues = new Float64Array(n);
  const pickedIndex = index === undefined ? undefined : new Float64Array(n);
  const out = new Float64Array(times);
  for (let t = 0; t < times; t++) {
    for (let i = 0; i < n; i++) {
      const from = Math.floor(draw() * n);
      pickedValues[i] = values[from];
      if (pickedIndex !== undefined) pickedIndex[i] = index![from];
    }
    out[t] = groupValue(pickedValues, pickedIndex, options.at, options.method ?? 'theil-sen');
  }
  return out;
}

/** @internal Why a group gives no value, or undefined when it gives one. */
export function unfitGroup({ values, index }: GroupSamples, options: ArcValueOptions): string | undefined {
  const { at } = options;
  if (values.length < fewest(options))
    return `needs ${fewest(options)} samples${at === undefined ? '' : ` with ${at.index} ${at.window[0]}–${at.window[1]}`}`;
  if (index === undefined || at === undefined) return undefined;
  const [from, to] = [quantileOf(index, 0), quantileOf(index, 1)];
  if (to - from < (at.window[1] - at.window[0]) / 5) return `${at.index} of the samples varies too little for a line`;
  // A line carries a little way beyond its samples, and no further than half their own range.
  const outside = Math.max(from - at.value, at.value - to);
  return outside > (to - from) / 2 ? `${at.index} of the samples (${from.toFixed(1)}–${to.toFixed(1)}) is too far from ${at.value}` : undefined;
}

function describe(samples: GroupSamples, options: ArcValueOptions, draw: () => number): ArcValue {
  const { group, values, index, rows } = samples;
  const { at, method = 'theil-sen' } = options;
  const ends = index === undefined || index.length === 0 ? {} : { from: quantileOf(index, 0), to: quantileOf(index, 1) };
  const base = { group, used: values.length, of: rows.length, ...ends };
  const unfit = unfitGroup(samples, options);
  if (unfit !== undefined) return { ...base, value: NaN, sigma: NaN, note: unfit };
  const sigma = robustDeviation(resampledValues(samples, options, draw, 400));
  const value = groupValue(values, index, at, method);
  if (index === undefined || at === undefined) return { ...base, value, sigma, note: '' };
  const outside = Math.max(ends.from! - at.value, at.value - ends.to!);
  return {
    ...base,
    value,
    sigma,
    slope: robustLine(method, index, values).slope,
    note: outside > 0 ? `extrapolated by ${outside.toFixed(1)} ${at.index}` : '',
  };
}

/** Half the central 68.3 % of re-sampled values: 1σ that a few wild draws do not blow up. */
function robustDeviation(values: Float64Array): number {
  const width = quantileOf(values, 0.8413) - quantileOf(values, 0.1587);
  return Number.isFinite(width) ? width / 2 : robustSpread(values);
}
