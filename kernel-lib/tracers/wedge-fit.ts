import { setImmediate as nextTurn } from 'node:timers/promises';
import { seededRandom } from '../chemistry';
import { showAs, type Showable, type TableView } from '../display';
import { step, type Step, type Suite } from '../suite';
import { checkCall } from './check-call';
import { checkedWedgeOptions, wedgeParameterNames, type FluxedWedgeOptions, type WedgeParameterName } from './fluxed-wedge';
import { wedgeObservations } from './wedge-data';
import type { WedgeEndMembers } from './wedge-end-members';
import { bestWedge, drawWedge, finishWedge, prepareWedge, type OneWedgeFit, type WedgeEstimate } from './wedge-fit-one';

/** How the model is fitted. */
export interface WedgeFitOptions extends FluxedWedgeOptions {
  /** A label: one fit a group, to its medians, in place of one a sample. */
  readonly group?: string;
  /** Elements to fit (default: all of the end members that the suite has). */
  readonly elements?: readonly string[];
  /** Least relative 1σ of a concentration (default 0.05): laboratory, sampling and model together. */
  readonly error?: number;
  /** Parameters held at a value, e.g. `{ priorMelt: 0 }`. */
  readonly fixed?: Partial<Readonly<Record<WedgeParameterName, number>>>;
  /** Lower and upper bound by parameter (defaults: melt 0.005 to where a phase is used up, fluid and sediment 0–0.1, priorMelt 0–0.05). */
  readonly bounds?: Partial<Readonly<Record<WedgeParameterName, readonly [number, number]>>>;
  /** Monte Carlo draws (default 1000). */
  readonly draws?: number;
  /** Seed of the draws (default 1). */
  readonly seed?: number;
  /** A parameter is resolved when the upper end of its 95 % interval is at most this many times the lower (default 4: a factor of 2 either way). */
  readonly resolvedWithin?: number;
  readonly signal?: AbortSignal;
  readonly progress?: (done: number, total: number) => void;
}

/** Fits of the fluxed wedge to samples or group medians. */
export interface WedgeFit extends Showable {
  readonly curve: 'sample' | 'group';
  readonly group?: string;
  readonly fits: readonly OneWedgeFit[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** Draws between two looks at the clock of the front end: short enough that an interrupt is felt at once. */
const drawsAtATime = 20;
/** Lavas with less MgO have crystallised too much for their concentrations to be those of a mantle melt. */
const primitiveMgO = 6;

/**
 * How much fluid, how much sediment melt, how much melting: the fluxed-wedge model fitted to each sample or each group's medians by weighted
 * least squares on the logarithms, bounded, from several starts, with a seeded Monte Carlo (each draw perturbs every concentration by its
 * error and fits again).
 *
 * Each parameter comes with its 95 % interval and a verdict: `resolved`, `upper limit only`, or `not resolvable` where the elements do not
 * constrain it. When the misfit is larger than the errors allow (χ² beyond its 95 % point), intervals are widened by √(χ²/ν) and the fit says
 * so. Crystallisation raises incompatible elements as less melting does: fit primitive lavas, or back-corrected ones.
 *
 * @param suite n samples with trace elements in ppm
 * @param options `group`, `facies`, `style`, `endMembers`, `elements`, `error`, `fixed`, `bounds`, `draws`, `seed`, `resolvedWithin`, `signal`,
 *   `progress`
 * @returns one fit a sample or group: parameters (fractions by weight) with 95 % interval, residual of each element in σ and %, χ², shares of
 *   the components, correlations and draws for a corner diagram
 * @throws RangeError for bad options; the signal's reason when it is aborted
 * @source Shaw 1970 (melting equations); end members by their own sources
 * @example (await fitFluxedWedge(suite, { group: 'volcano', draws: 200 })).fits[0].parameters.fluid.value
 */
export async function fitFluxedWedge(suite: Suite, options: WedgeFitOptions = {}): Promise<WedgeFit> {
  checkCall('fitFluxedWedge', suite, options);
  const caller = 'fitFluxedWedge';
  const { facies, style, endMembers } = checkedWedgeOptions(caller, options);
  const { group, error = 0.05, draws = 1000, seed = 1, resolvedWithin = 4, signal, progress } = options;
  const elements = checkElements(caller, endMembers, options.elements);
  if (!(error > 0 && error < 1)) throw new RangeError(`${caller}: error is ${String(error)}; give a relative 1σ above 0 and below 1.`);
  if (!(Number.isInteger(draws) && draws >= 50)) throw new RangeError(`${caller}: draws is ${String(draws)}; give a whole number of 50 or more.`);
  if (!(resolvedWithin > 1)) throw new RangeError(`${caller}: resolvedWithin is ${String(resolvedWithin)}; give a factor above 1.`);
  // Each fit starts its own stream; this one only asks whether the seed is one, before any work is done.
  seededRandom(seed, caller);
  const bounds = wedgeBounds(caller, endMembers, facies, options.bounds);
  const fixed = options.fixed ?? {};
  for (const [name, value] of Object.entries(fixed)) {
    if (!(wedgeParameterNames as readonly string[]).includes(name))
      throw new RangeError(`${caller}: fixed names "${name}"; the parameters are ${wedgeParameterNames.join(', ')}.`);
    if (!(value! >= 0 && value! < 1)) throw new RangeError(`${caller}: fixed ${name} is ${String(value)}; give a fraction of 0 or more and below 1.`);
  }
  if (wedgeParameterNames.every((name) => fixed[name] !== undefined))
    throw new RangeError(`${caller}: every parameter is fixed, so there is nothing to fit; use fluxedWedgeMelt.`);

  const observations = wedgeObservations(suite, elements, error, group);
  const total = observations.length * draws;
  const fits: OneWedgeFit[] = [];
  for (const observation of observations) {
    const prepared = prepareWedge(observation, { endMembers, facies, style, bounds, fixed, seed, resolvedWithin });
    const best = bestWedge(prepared);
    if (best !== undefined) {
      for (let done = 0; done < draws; done += drawsAtATime) {
        await nextTurn();
        signal?.throwIfAborted();
        drawWedge(prepared, best, Math.min(drawsAtATime, draws - done));
        progress?.(fits.length * draws + Math.min(draws, done + drawsAtATime), total);
      }
    }
    fits.push(finishWedge(prepared, best));
    progress?.(fits.length * draws, total);
  }
  const magnesia = suite.columns.get('MgO')?.values;
  const evolved = magnesia === undefined ? 0 : magnesia.reduce((count, value) => count + (value < primitiveMgO ? 1 : 0), 0);
  const notes = [
    ...(evolved > 0
      ? [
          `${evolved} of ${suite.size} samples have MgO below ${primitiveMgO} wt %: crystallisation has raised their incompatible elements, ` +
            'which the fit reads as less melting.',
        ]
      : []),
    ...endMembers.notes,
  ];
  const detail = {
    facies,
    style,
    elements,
    error,
    draws,
    seed,
    resolvedWithin,
    fixed: { ...fixed },
    bounds: Object.fromEntries(Object.entries(bounds).map(([name, pair]) => [name, [...pair]])),
    fits: fits.length,
    ...(group === undefined ? {} : { group }),
  };
  const whose = group === undefined ? 'each sample' : `the medians of each ${group}`;
  const says =
    `Melt fraction, slab fluid, sediment melt and prior melting were fitted to ${whose} (${style} melting, ${facies} facies) by weighted least ` +
    `squares on log concentrations of ${elements.join(', ')}, with ${draws} Monte Carlo draws (seed ${seed}).`;
  const lineage = [...suite.lineage, ...endMembers.lineage, step(caller, detail, { sources: ['shaw_1970'], says })];
  return showAs(
    { curve: group === undefined ? ('sample' as const) : ('group' as const), ...(group === undefined ? {} : { group }), fits, notes, lineage },
    fitView,
  );
}

function checkElements(caller: string, endMembers: WedgeEndMembers, wanted: readonly string[] | undefined): readonly string[] {
  if (wanted === undefined) return endMembers.elements;
  if (!Array.isArray(wanted) || wanted.length === 0) throw new RangeError(`${caller}: elements must be a list with at least one element in it.`);
  const unknown = wanted.filter((element) => !endMembers.elements.includes(element));
  if (unknown.length > 0)
    throw new RangeError(`${caller}: the end members have no ${unknown.join(', ')}. They have: ${endMembers.elements.join(', ')}.`);
  return wanted;
}

function wedgeBounds(
  caller: string,
  endMembers: WedgeEndMembers,
  facies: 'spinel' | 'garnet',
  own: WedgeFitOptions['bounds'] = {},
): Readonly<Record<WedgeParameterName, readonly [number, number]>> {
  const bounds: Record<WedgeParameterName, readonly [number, number]> = {
    melt: [0.005, Math.min(0.35, endMembers.melting[facies].holdsTo)],
    fluid: [0, 0.1],
    sediment: [0, 0.1],
    priorMelt: [0, 0.05],
  };
  for (const [name, pair] of Object.entries(own)) {
    if (!(wedgeParameterNames as readonly string[]).includes(name))
      throw new RangeError(`${caller}: bounds names "${name}"; the parameters are ${wedgeParameterNames.join(', ')}.`);
    if (!(Array.isArray(pair) && pair.length === 2 && pair[0] >= 0 && pair[0] < pair[1] && pair[1] < 1)) {
      throw new RangeError(`${caller}: bounds of ${name} are ${JSON.stringify(pair)}; give [lower, upper] with 0 ≤ lower < upper < 1.`);
    }
    bounds[name as WedgeParameterName] = pair as readonly [number, number];
  }
  if (!(bounds.melt[0] > 0)) throw new RangeError(`${caller}: the lower bound of melt must be above 0.`);
  return bounds;
}

/** An estimate in words: `15.2 % (13.8–16.9)`, `< 0.4 %`, `not resolvable`. */
export function wedgeEstimateText(estimate: WedgeEstimate): string {
  const percent = (fraction: number) => String(Number((100 * fraction).toPrecision(3)));
  switch (estimate.status) {
    case 'fixed':
      return `${percent(estimate.value)} % (held)`;
    case 'resolved':
      return `${percent(estimate.value)} % (${percent(estimate.low)}–${percent(estimate.high)})`;
    case 'upper limit only':
      return `<${percent(estimate.high)} %`;
    case 'not resolvable':
      return 'not resolvable';
  }
}

function fitView(result: Omit<WedgeFit, keyof Showable>): TableView {
  return {
    title: 'Fluxed wedge fitted (95 % intervals in brackets)',
    columns: [
      result.group ?? 'sample',
      'samples',
      'melt F',
      'slab fluid x',
      'sediment melt y',
      'prior melting m',
      'χ²/ν',
      'elements',
      'worst element',
      'in words',
    ],
    rows: result.fits.map((fit) => [
      fit.name,
      fit.samples,
      ...wedgeParameterNames.map((name) => wedgeEstimateText(fit.parameters[name])),
      fit.degreesOfFreedom > 0 ? Number((fit.chiSquare / fit.degreesOfFreedom).toPrecision(3)) : null,
      fit.elements.length,
      fit.worstElement ?? null,
      fit.verdict,
    ]),
    notes: result.notes,
  };
}
