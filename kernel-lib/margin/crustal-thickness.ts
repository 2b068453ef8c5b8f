import { showAs, type Showable } from '../display';
import { evaluate, ExpressionError, step, type Step, type Suite } from '../suite';
import { reservoir, shortSource } from '../tables';
import { crustCalibrations, crustCautions, crustFilter, thicknessFromRatios, type CrustCalibration } from './crust';
import { medianOf, quantileOf, randomSource, studentT } from './regression';
import { round } from './slab-below';

/** How thickness is read from a suite. */
export interface CrustOptions {
  /** Which calibrations (default: all of those for arcs). */
  readonly calibrations?: readonly string[];
  /** Give a thickness for each group of this label apart (default: one for the whole suite). */
  readonly by?: string;
  /** Fewest samples after the filter (default 5). */
  readonly minimum?: number;
  /** Seed of the bootstrap of the median (default 1988). */
  readonly seed?: number;
}

/** What one calibration gives for one group. */
export interface CrustEstimate {
  readonly group: string;
  readonly calibration: string;
  readonly name: string;
  /** km; NaN where there is none, with the reason in `note`. */
  readonly thickness: number;
  /** Interval that holds 95 % of bootstrapped suite medians, km: sampling alone, without the calibration's own error. */
  readonly interval: readonly [number, number];
  /** The calibration's stated uncertainty, km; NaN where it is not recorded. */
  readonly calibrationError: number;
  /** Median (or maximum) of each ratio used. */
  readonly ratios: Readonly<Record<string, number>>;
  /** How many samples came in, and how many each step of the filter left. */
  readonly counts: readonly { readonly step: string; readonly left: number }[];
  readonly used: number;
  readonly note: string;
}

export interface CrustalThickness {
  readonly estimates: readonly CrustEstimate[];
  /** Where calibrations disagree, and the published cautions. */
  readonly warnings: readonly string[];
  readonly lineage: readonly Step[];
}

/** Thickness of oceanic crust, km (common practice): nothing thinner is the crust of an arc. */
const oceanicCrust = 7;
/** Calibrations further apart than this are pointed out, km. */
const disagreement = 10;

/**
 * Thickness of the crust below an arc from Sr/Y, (La/Yb)N and their combination: each published calibration apart, on suite medians of the samples
 * that pass its filter, never on single samples.
 *
 * Each step of the filter is counted: its ranges (SiO2, MgO, Rb/Sr), a usable ratio, then outliers of the ratio's logarithm (modified Thompson τ,
 * α = 0.05). The interval is a seeded bootstrap of the median; the calibration's own uncertainty stands beside it where it is recorded. Put the
 * suite on a volatile-free basis first.
 *
 * @param suite n samples with SiO2, MgO (wt %), Rb, Sr, Y, La, Yb (ppm)
 * @param options `calibrations` (keys of reference-tables/crustal-thickness.json), `by`, `minimum`, `seed`
 * @returns estimates by group and calibration (km), warnings where they disagree by more than 10 km
 * @throws RangeError for an unknown calibration or label
 * @source Profeta et al. 2015; Chapman et al. 2015; Sundell et al. 2021; Hu et al. 2017; Mantle & Collins 2008
 * @example crustalThickness(dry).estimates
 */
export function crustalThickness(suite: Suite, options: CrustOptions = {}): CrustalThickness & Showable {
  const { by, minimum = 5, seed = 1988 } = options;
  const known = crustCalibrations();
  const keys = options.calibrations ?? [...known.values()].filter(({ setting }) => setting === 'arc').map(({ key }) => key);
  if (!Array.isArray(keys) || keys.length === 0)
    throw new RangeError(`crustalThickness: calibrations must be a list of keys. Known: ${[...known.keys()].join(', ')}.`);
  for (const key of keys)
    if (!known.has(key)) throw new RangeError(`crustalThickness: there is no calibration "${key}". Known: ${[...known.keys()].join(', ')}.`);
  if (!(minimum >= 3)) throw new RangeError(`crustalThickness: minimum must be 3 samples or more, not ${String(minimum)}.`);
  const groups: [string, Suite][] = by === undefined ? [['all', suite]] : [...suite.groupBy(by)].filter(([name]) => name !== '');
  const estimates = groups.flatMap(([group, members]) => keys.map((key) => estimate(members, group, known.get(key)!, { minimum, seed })));
  const warnings = [
    ...groups.flatMap(([group]) => disagreements(group, estimates, by !== undefined)),
    ...crustCautions().map(({ text, source }) => `${capital(text)} (${shortSource(source)}).`),
  ];
  const unheard = new Set(keys.flatMap((key) => known.get(key)!.cautions.map((caution) => `${known.get(key)!.name}: ${caution}.`)));
  warnings.push(...unheard);
  if (!suite.has('SumAsGiven'))
    warnings.push('The suite is not on a volatile-free basis, which the silica and magnesia limits of the filters expect: see volatileFree.');
  const fromMemory = keys.filter((key) => known.get(key)!.standing === 'from memory');
  if (fromMemory.length > 0) warnings.push(`Coefficients recalled and not checked against the print: ${fromMemory.join(', ')}.`);
  const result: CrustalThickness = {
    estimates,
    warnings,
    lineage: [
      ...suite.lineage,
      step(
        'crustalThickness',
        { calibrations: [...keys], by: by ?? null, minimum, seed },
        {
          sources: [...new Set(keys.flatMap((key) => known.get(key)!.sources))],
          tables: ['crustal-thickness.json', 'reservoirs.csv'],
          fromMemory: fromMemory.map(
            (key) => `calibration ${known.get(key)!.name} of crustal thickness (${known.get(key)!.sources.map(shortSource).join('; ')})`,
          ),
          says: 'Thickness of the crust was read from suite medians of filtered samples by each published calibration apart.',
        },
      ),
    ],
  };
  return showAs(result, () => ({
    title: 'Thickness of the crust',
    columns: [
      ...(by === undefined ? [] : [by]),
      'calibration',
      'thickness (km)',
      'from',
      'to',
      '± calibration (km)',
      'ratios',
      'samples used',
      'filter',
      'note',
    ],
    rows: estimates.map((e) => [
      ...(by === undefined ? [] : [e.group]),
      `${e.name} (${known.get(e.calibration)!.sources.map(shortSource).join('; ')})`,
      round(e.thickness, 1),
      round(e.interval[0], 1),
      round(e.interval[1], 1),
      e.calibrationError,
      Object.entries(e.ratios)
        .map(([name, value]) => `${name} ${value.toPrecision(3)}`)
        .join(', '),
      e.used,
      e.counts.map(({ step: name, left }) => `${name} ${left}`).join(' → '),
      e.note,
    ]),
    notes: warnings,
  }));
}

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);

function estimate(
  suite: Suite,
  group: string,
  calibration: CrustCalibration,
  how: { readonly minimum: number; readonly seed: number },
): CrustEstimate {
  const base = { group, calibration: calibration.key, name: calibration.name, calibrationError: calibration.uncertainty ?? NaN };
  const nothing = (note: string, counts: CrustEstimate['counts'] = [], used = 0): CrustEstimate => ({
    ...base,
    thickness: NaN,
    interval: [NaN, NaN],
    ratios: {},
    counts,
    used,
    note,
  });
  const chondrite = calibration.chondrite === undefined ? undefined : reservoir(calibration.chondrite);
  const reference = (symbol: string) => chondrite?.values.get(symbol)?.value ?? NaN;
  const filter = crustFilter(calibration.filter);
  const counts: { step: string; left: number }[] = [{ step: 'all', left: suite.size }];
  let rows = Array.from({ length: suite.size }, (_, i) => i);
  try {
    for (const { of, from = -Infinity, to = Infinity, optional = false } of filter.ranges) {
      const values = optional && !suite.has(of) ? undefined : evaluate(suite, of).values;
      if (values === undefined) continue;
      rows = rows.filter((i) => (optional && Number.isNaN(values[i])) || (values[i] >= from && values[i] <= to));
      counts.push({
        step: rangeText(of, from, to),
        left: rows.length,
      });
    }
    const ratios = calibration.terms.map(({ of }) => evaluate(suite, of, { reference }).values);
    rows = rows.filter((i) => ratios.every((values) => values[i] > 0 && Number.isFinite(values[i])));
    counts.push({ step: `${calibration.terms.map(({ of }) => of).join(' and ')} usable`, left: rows.length });
    for (const values of ratios) rows = keepByThompson(rows, (i) => Math.log(values[i]));
    counts.push({ step: 'without outliers', left: rows.length });
    if (rows.length < how.minimum) return nothing(`needs ${how.minimum} samples after the filter`, counts, rows.length);
    const statistic = (of: readonly number[]) => {
      const found: Record<string, number> = {};
      calibration.terms.forEach(
        (term, k) =>
          (found[term.of] =
            calibration.statistic === 'median' ? medianOf(of.map((i) => ratios[k][i])) : of.reduce((most, i) => Math.max(most, ratios[k][i]), 0)),
      );
      return found;
    };
    const found = statistic(rows);
    const draw = randomSource(how.seed);
    const drawn = Float64Array.from({ length: 1000 }, () =>
      thicknessFromRatios(calibration.key, statistic(rows.map(() => rows[Math.floor(draw() * rows.length)]))),
    );
    const thickness = thicknessFromRatios(calibration.key, found);
    const errors = coefficientNote(calibration);
    const note = [
      thickness < oceanicCrust ? `thinner than oceanic crust (some ${oceanicCrust} km): the ratio is below the range of the calibration` : '',
      errors,
    ]
      .filter((text) => text !== '')
      .join('; ');
    return {
      ...base,
      thickness: thickness <= 0 ? NaN : thickness,
      interval: [quantileOf(drawn, 0.025), quantileOf(drawn, 0.975)],
      ratios: found,
      counts,
      used: rows.length,
      note,
    };
  } catch (error) {
    if (error instanceof ExpressionError) return nothing(`not determined: ${error.message}`, counts);
    throw error;
  }
}

function rangeText(of: string, from: number, to: number): string {
  if (Number.isFinite(from) && Number.isFinite(to)) return `${of} ${from}–${to}`;
  return Number.isFinite(from) ? `${of} ≥ ${from}` : `${of} ≤ ${to}`;
}

function coefficientNote({ constantError, terms, uncertainty }: CrustCalibration): string {
  if (uncertainty !== undefined) return '';
  const errors = [
    ...terms.map(({ coefficient, coefficientError }) => (coefficientError === undefined ? '' : `${coefficient} ± ${coefficientError}`)),
    constantError === undefined ? '' : `constant ± ${constantError}`,
  ].filter((text) => text !== '');
  return errors.length === 0 ? 'uncertainty of the calibration not recorded' : `coefficients ${errors.join(', ')} (their covariance is not recorded)`;
}

/** Modified Thompson τ for n values: t (n − 1) / (√n √(n − 2 + t²)), with Student's t for n − 2 degrees of freedom. */
export function thompsonTau(n: number, alpha = 0.05): number {
  const t = studentT(alpha, n - 2);
  return (t * (n - 1)) / (Math.sqrt(n) * Math.sqrt(n - 2 + t * t));
}

/** Modified Thompson τ: takes out the value furthest from the mean while it is further than τ standard deviations, one at a time. */
export function keepByThompson(rows: readonly number[], value: (row: number) => number, alpha = 0.05): number[] {
  let kept = [...rows];
  for (;;) {
    const n = kept.length;
    if (n < 4) return kept;
    const values = kept.map(value);
    const mean = values.reduce((sum, v) => sum + v, 0) / n;
    const deviation = Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (n - 1));
    const tau = thompsonTau(n, alpha);
    let worst = 0;
    for (let i = 1; i < n; i++) if (Math.abs(values[i] - mean) > Math.abs(values[worst] - mean)) worst = i;
    if (!(Math.abs(values[worst] - mean) > tau * deviation)) return kept;
    kept = kept.filter((_, i) => i !== worst);
  }
}

function disagreements(group: string, estimates: readonly CrustEstimate[], named: boolean): string[] {
  const mine = estimates.filter((each) => each.group === group && Number.isFinite(each.thickness)).sort((a, b) => a.thickness - b.thickness);
  if (mine.length < 2) return [];
  const least = mine[0];
  const most = mine[mine.length - 1];
  const apart = most.thickness - least.thickness;
  if (apart <= disagreement) return [];
  return [
    `${named ? `${group}: ` : ''}the calibrations disagree by ${apart.toFixed(0)} km, from ${least.thickness.toFixed(0)} km ` +
      `(${least.name}) to ${most.thickness.toFixed(0)} km (${most.name}): take none of them alone.`,
  ];
}
