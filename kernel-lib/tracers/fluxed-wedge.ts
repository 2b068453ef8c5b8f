import { batchMelt, fractionalResidue, pooledFractionalMelt } from '../chemistry';
import { showAs, type Showable, type TableView } from '../display';
import { step, type Step } from '../suite';
import { wedgeEndMembers, type MantleFacies, type WedgeEndMembers } from './wedge-end-members';

/** The four numbers of the model, all fractions by weight (0–1). */
export interface WedgeParameters {
  /** Melt fraction F of the fluxed source. */
  readonly melt: number;
  /** Slab fluid in the source, x. */
  readonly fluid: number;
  /** Sediment melt in the source, y. */
  readonly sediment: number;
  /** Melt lost by the mantle before (fractional melting), m. */
  readonly priorMelt: number;
}

/** Names of the parameters, in the order in which the library keeps them. */
export const wedgeParameterNames = ['melt', 'fluid', 'sediment', 'priorMelt'] as const;
export type WedgeParameterName = (typeof wedgeParameterNames)[number];

/** How the fluxed source melts. */
export type WedgeMeltingStyle = 'batch' | 'pooled-fractional';

/** What the model needs besides its parameters. */
export interface FluxedWedgeOptions {
  /** Facies in which both melting events happen (default `spinel`). */
  readonly facies?: MantleFacies;
  /** Default `batch`. */
  readonly style?: WedgeMeltingStyle;
  /** From `wedgeEndMembers` (default: its defaults). */
  readonly endMembers?: WedgeEndMembers;
}

/** A melt of the fluxed wedge, element by element. */
export interface WedgeMelt extends Showable {
  readonly parameters: WedgeParameters;
  readonly elements: readonly string[];
  /** ppm in the melt. */
  readonly melt: Float64Array;
  /** ppm in the source that melts. */
  readonly source: Float64Array;
  /** Share of each element that came with the wedge, the fluid and the sediment melt (0–1; they sum to 1). */
  readonly fromWedge: Float64Array;
  readonly fromFluid: Float64Array;
  readonly fromSediment: Float64Array;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/**
 * The melt of a mantle wedge that lost melt before, took up slab fluid and sediment melt, and melted.
 *
 * Mantle after prior melting: C = C0·(1 − P·m/D0)^(1/P)/(1 − m), with D0 changed to (D0 − P·m)/(1 − m). Source: (1 − x − y)·mantle + x·fluid
 * + y·sediment melt. Melt: batch, C/[D0 + F(1 − P)], or pooled fractional.
 *
 * @param parameters `melt` F, `fluid` x, `sediment` y, `priorMelt` m (default 0), fractions by weight
 * @param options `facies`, `style`, `endMembers`
 * @returns ppm by element, with the share of each component
 * @throws RangeError for fractions outside 0–1, or x + y ≥ 1
 * @source Shaw 1970 (melting); end members by their own sources
 * @example fluxedWedgeMelt({ melt: 0.15, fluid: 0.005, sediment: 0.002 }).melt
 */
export function fluxedWedgeMelt(
  parameters: Omit<WedgeParameters, 'priorMelt'> & { readonly priorMelt?: number },
  options: FluxedWedgeOptions = {},
): WedgeMelt {
  const { melt, fluid, sediment, priorMelt = 0 } = parameters;
  for (const [name, value] of Object.entries({ melt, fluid, sediment, priorMelt })) {
    if (!(value >= 0 && value < 1)) throw new RangeError(`fluxedWedgeMelt: ${name} is ${String(value)}; give a fraction of 0 or more and below 1.`);
  }
  if (!(fluid + sediment < 1)) throw new RangeError('fluxedWedgeMelt: fluid and sediment together must stay below 1: the rest is mantle.');
  const { facies, style, endMembers } = checkedWedgeOptions('fluxedWedgeMelt', options);
  const { elements, notes } = endMembers;
  const whole = { melt, fluid, sediment, priorMelt };
  const model = new WedgeModel(endMembers, elements, facies, style);
  const out = new Float64Array(elements.length);
  model.logMelt([melt, fluid, sediment, priorMelt], out);
  const shares = model.shares([melt, fluid, sediment, priorMelt]);
  const limit = endMembers.melting[facies].holdsTo;
  const total = priorMelt + (1 - priorMelt) * melt;
  const beyond =
    total > limit
      ? [`Total melting ${total.toFixed(3)} is beyond ${limit.toFixed(3)}, where the first melting phase is used up: the result is an extrapolation.`]
      : [];
  const result = {
    parameters: whole,
    elements,
    melt: out.map(Math.exp),
    ...shares,
    notes: [...beyond, ...notes],
    lineage: [...endMembers.lineage, step('fluxedWedgeMelt', { ...whole, facies, style }, { sources: ['shaw_1970'] })],
  };
  return showAs(result, meltView);
}

/** Options checked and made whole. */
export function checkedWedgeOptions(caller: string, options: FluxedWedgeOptions): Required<FluxedWedgeOptions> {
  const { facies = 'spinel', style = 'batch', endMembers = wedgeEndMembers() } = options;
  if (facies !== 'spinel' && facies !== 'garnet') throw new RangeError(`${caller}: facies must be "spinel" or "garnet", not "${String(facies)}".`);
  if (style !== 'batch' && style !== 'pooled-fractional')
    throw new RangeError(`${caller}: style must be "batch" or "pooled-fractional", not "${String(style)}".`);
  if (!Array.isArray(endMembers?.elements)) throw new TypeError(`${caller}: endMembers must come from wedgeEndMembers().`);
  return { facies, style, endMembers };
}

const leastD = 1e-9;
const leastPpm = 1e-12;

/** The model made ready for inner loops: one object a fit, no allocation an evaluation. Parameters in the order of `wedgeParameterNames`. */
export class WedgeModel {
  private readonly mantle: Float64Array;
  private readonly fluid: Float64Array;
  private readonly sediment: Float64Array;
  private readonly startD: Float64Array;
  private readonly reactionD: Float64Array;
  private readonly batch: boolean;
  readonly size: number;

  constructor(members: WedgeEndMembers, elements: readonly string[], facies: MantleFacies, style: WedgeMeltingStyle) {
    const at = elements.map((element) => members.elements.indexOf(element));
    const pick = (values: Float64Array) => Float64Array.from(at, (e) => values[e]);
    this.mantle = pick(members.mantle);
    this.fluid = pick(members.fluid);
    this.sediment = pick(members.sedimentMelt);
    this.startD = pick(members.melting[facies].startD);
    this.reactionD = pick(members.melting[facies].reactionD);
    this.batch = style === 'batch';
    this.size = elements.length;
  }

  /** Writes ln(ppm in the melt) of each element into `out`. */
  logMelt(parameters: ArrayLike<number>, out: Float64Array): void {
    const F = parameters[0];
    const x = parameters[1];
    const y = parameters[2];
    const m = parameters[3];
    for (let e = 0; e < this.size; e++) {
      const P = this.reactionD[e];
      const left = m > 0 ? this.mantle[e] * fractionalResidue(this.startD[e], P, m) : this.mantle[e];
      const D = m > 0 ? Math.max(0, this.startD[e] - P * m) / (1 - m) : this.startD[e];
      const source = (1 - x - y) * left + x * this.fluid[e] + y * this.sediment[e];
      // An element that prior melting took away to nothing has a logarithm all the same, far below any analysis.
      const concentration = source * (this.batch ? batchMelt(D, P, F) : pooledFractionalMelt(Math.max(D, leastD), P, F));
      out[e] = Math.log(concentration > leastPpm ? concentration : leastPpm);
    }
  }

  /** The source and where each element of it came from. */
  shares(parameters: ArrayLike<number>): Pick<WedgeMelt, 'source' | 'fromWedge' | 'fromFluid' | 'fromSediment'> {
    const [, x, y, m] = Array.from(parameters);
    const source = new Float64Array(this.size);
    const [fromWedge, fromFluid, fromSediment] = [0, 1, 2].map(() => new Float64Array(this.size));
    for (let e = 0; e < this.size; e++) {
      const wedge = (1 - x - y) * this.mantle[e] * fractionalResidue(this.startD[e], this.reactionD[e], m);
      source[e] = wedge + x * this.fluid[e] + y * this.sediment[e];
      fromWedge[e] = wedge / source[e];
      fromFluid[e] = (x * this.fluid[e]) / source[e];
      fromSediment[e] = (y * this.sediment[e]) / source[e];
    }
    return { source, fromWedge, fromFluid, fromSediment };
  }
}

function meltView(result: Omit<WedgeMelt, keyof Showable>): TableView {
  const { parameters, elements, melt, source, fromWedge, fromFluid, fromSediment, notes } = result;
  const percent = (fraction: number) => Number((100 * fraction).toPrecision(3));
  const short = (value: number) => Number(value.toPrecision(4));
  return {
    title:
      `Melt of the fluxed wedge: F ${percent(parameters.melt)} %, fluid ${percent(parameters.fluid)} %, ` +
      `sediment melt ${percent(parameters.sediment)} %, prior melting ${percent(parameters.priorMelt)} %`,
    columns: ['element', 'melt (ppm)', 'source (ppm)', 'from wedge (%)', 'from fluid (%)', 'from sediment melt (%)'],
    rows: elements.map((element, e) => [
      element,
      short(melt[e]),
      short(source[e]),
      percent(fromWedge[e]),
      percent(fromFluid[e]),
      percent(fromSediment[e]),
    ]),
    notes,
  };
}
