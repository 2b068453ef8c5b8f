import { rareEarths } from '../chemistry';
import { showAs, type Showable, type TableView } from '../display';
import { step, type Step } from '../suite';
import { coefficientsFor, mantleMode } from '../tables';
import { ionicRadius } from './ionic-radii';
import { referenceComposition, type ReferenceComposition } from './reference';
import { slabCoefficients } from './slab-partitioning';

/** In which facies the wedge melts. */
export type MantleFacies = 'spinel' | 'garnet';

/** How the mantle solid holds each element while it melts. */
export interface MantleMelting {
  /** Bulk D of the fertile solid, D0, one an element. */
  readonly startD: Float64Array;
  /** Bulk D of the phases in the proportions in which they melt, P, one an element. */
  readonly reactionD: Float64Array;
  /** Total melt fraction at which the first phase of the reaction is used up: the equations hold below it. */
  readonly holdsTo: number;
}

/** What is mixed and melted: concentrations of the three end members and the coefficients of the mantle. */
export interface WedgeEndMembers extends Showable {
  readonly elements: readonly string[];
  /** Mantle before any melting, ppm, one an element. */
  readonly mantle: Float64Array;
  /** Slab fluid, ppm. */
  readonly fluid: Float64Array;
  /** Sediment melt (or whatever was given for it), ppm. */
  readonly sedimentMelt: Float64Array;
  readonly melting: Readonly<Record<MantleFacies, MantleMelting>>;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** Choices of the end members; every one can be replaced by your own. */
export interface WedgeEndMemberOptions {
  /** Elements of the model (default: those measured in the default coefficient sets, and Gd, Dy between their neighbours). */
  readonly elements?: readonly string[];
  /** Mantle before melting (default `depleted-mantle-2005`). */
  readonly mantle?: ReferenceComposition;
  /** Crust that gives off the fluid (default: `n-morb-1989` with K, Rb, U of `altered-crust-801-2003`). */
  readonly crust?: ReferenceComposition;
  /** Sediment that melts (default `subducting-sediment-1998`). */
  readonly sediment?: ReferenceComposition;
  /** Fluid composition of your own, ppm by element: then crust and coefficients are not used. */
  readonly fluid?: Readonly<Record<string, number>>;
  /** Composition of your own for the sediment component, ppm by element. */
  readonly sedimentMelt?: Readonly<Record<string, number>>;
  /** Source key of the fluid coefficients (default `kessel_2005`). */
  readonly fluidCoefficients?: string;
  /** What the crust keeps: eclogite with 1 % rutile, which holds Nb, Ta and Ti back (default), or eclogite as measured. */
  readonly fluidResidue?: 'eclogite-with-rutile' | 'eclogite';
  /** Fluid given off, as a fraction of the crust (default 0.05). */
  readonly fluidFraction?: number;
  /** Source keys of the sediment-melt coefficients, in order of preference (default `xiong_2006`, then `kelemen_2003`, both with rutile). */
  readonly sedimentCoefficients?: readonly string[];
  /** Melt fraction of the sediment (default 0.2). */
  readonly sedimentMeltFraction?: number;
  /** Bulk mantle/melt coefficients of your own, by element (modal melting, both facies alike). */
  readonly mantleCoefficients?: Readonly<Record<string, number>>;
}

/** Elements with a measured coefficient in every default set, and Gd, Dy by interpolation: enough to tell fluid, sediment and garnet apart. */
export const wedgeElements: readonly string[] = ['Rb', 'Ba', 'Th', 'U', 'Nb', 'La', 'Ce', 'Pb', 'Nd', 'Sr', 'Zr', 'Sm', 'Ti', 'Gd', 'Dy', 'Y', 'Yb'];

/** Modes and reactions of the two facies, one source each so that they belong together. */
const faciesSource: Readonly<Record<MantleFacies, string>> = { spinel: 'johnson_1990', garnet: 'walter_1998' };
const mantleSource = 'mckenzie_onions_1991';

/**
 * The end members of a wedge that is fluxed from the slab and melts: mantle, slab fluid, sediment melt, and the mantle's coefficients.
 *
 * The fluid is what a fraction of the crust gives off in equilibrium with eclogite, C = C0/[D + f(1 − D)]; the sediment melt likewise. The
 * default fluid coefficients are of a supercritical liquid at 6 GPa, the one complete set in the table: a shallower, more dilute fluid carries
 * less Th, rare earths and Zr, so give your own composition where you know it better.
 * A rare earth without a measured coefficient takes one between its neighbours, log-linear in ionic radius, and is named in the notes.
 * Bulk D of the mantle: Σ mode × coefficient, a coefficient that the set lacks (HFSE in spinel) counting as 0.
 *
 * @param options see `WedgeEndMemberOptions`; compositions by reservoir key or own values (ppm)
 * @returns concentrations in ppm and dimensionless coefficients, one an element
 * @throws RangeError for an unknown key, a fraction outside 0–1, or an element that an end member has no value of
 * @source Kessel et al. 2005, Xiong 2006, Kelemen et al. 2003 (as recast in Eiler et al. 2007); McKenzie & O'Nions 1991; Johnson et al. 1990;
 *   Walter 1998
 * @example wedgeEndMembers({ sediment: 'subducting-sediment-1998' }).sedimentMelt
 */
export function wedgeEndMembers(options: WedgeEndMemberOptions = {}): WedgeEndMembers {
  const { elements = wedgeElements, fluidFraction = 0.05, sedimentMeltFraction = 0.2, fluidResidue = 'eclogite-with-rutile' } = options;
  if (fluidResidue !== 'eclogite-with-rutile' && fluidResidue !== 'eclogite') {
    throw new RangeError(`wedgeEndMembers: fluidResidue must be "eclogite-with-rutile" or "eclogite", not "${String(fluidResidue)}".`);
  }
  for (const [name, value] of Object.entries({ fluidFraction, sedimentMeltFraction })) {
    if (!(value > 0 && value <= 1)) throw new RangeError(`wedgeEndMembers: ${name} is ${String(value)}; give a fraction above 0 and up to 1.`);
  }
  const notes: string[] = [];
  const sources = new Set<string>();
  const tables = new Set<string>();
  const fromMemory: string[] = [];
  const values = (what: string, from: ReferenceComposition): Float64Array => {
    const reference = referenceComposition(from);
    reference.sources.forEach((source) => sources.add(source));
    reference.tables.forEach((table) => tables.add(table));
    fromMemory.push(...reference.fromMemory(elements));
    if (reference.standings.length > 0) notes.push(`${what}: ${reference.name} (values ${reference.standings.join(', ')}).`);
    return ofElements(what, elements, (element) => reference.valueOf(element));
  };
  const liquid = (
    what: string,
    solid: Float64Array,
    sets: readonly (readonly [string, string])[],
    fraction: number,
    rutile = false,
  ): Float64Array => {
    const { coefficients, interpolated } = coefficientsOf(what, elements, sets, sources);
    if (rutile) {
      addRutile(elements, coefficients);
      sources.add('xiong_2006');
      notes.push(`${what}: 1 % rutile in the residue, its part from the difference of the two residues of xiong_2006.`);
    }
    tables.add('slab-fluid-partitioning.csv');
    if (interpolated.length > 0)
      notes.push(`${what}: coefficients of ${interpolated.join(', ')} interpolated between measured rare earths by ionic radius.`);
    notes.push(`${what}: liquid fraction ${fraction}, coefficients of ${sets.map(([source]) => source).join(', then ')}.`);
    return solid.map((value, e) => value / (coefficients[e] + fraction * (1 - coefficients[e])));
  };
  const mantle = values('mantle', options.mantle ?? 'depleted-mantle-2005');
  const fluid =
    options.fluid !== undefined
      ? values('fluid', options.fluid)
      : liquid(
          'fluid',
          values('crust', options.crust ?? alteredCrust()),
          [[options.fluidCoefficients ?? 'kessel_2005', '']],
          fluidFraction,
          fluidResidue === 'eclogite-with-rutile',
        );
  const sedimentSets = (options.sedimentCoefficients ?? ['xiong_2006', 'kelemen_2003']).map((source): [string, string] => [
    source,
    options.sedimentCoefficients === undefined ? 'rutile' : '',
  ]);
  const sedimentMelt =
    options.sedimentMelt !== undefined
      ? values('sediment component', options.sedimentMelt)
      : liquid('sediment melt', values('sediment', options.sediment ?? 'subducting-sediment-1998'), sedimentSets, sedimentMeltFraction);
  if (options.fluid === undefined && options.crust === undefined)
    notes.push('crust: N-MORB 1989, its K, Rb and U replaced by those of altered crust at ODP site 801.');

  if (options.fluid === undefined && options.crust === undefined)
    fromMemory.push('crust: N-MORB (Sun & McDonough 1989) with K, Rb, U of altered crust (Kelley et al. 2003)');
  if (options.mantleCoefficients === undefined)
    fromMemory.push('mantle coefficients (McKenzie & O’Nions 1991), modes and reactions (Johnson et al. 1990; Walter 1998)');
  const melting =
    options.mantleCoefficients === undefined ? publishedMelting(elements, sources, tables, notes) : ownMelting(elements, options.mantleCoefficients);
  const detail = {
    elements: [...elements],
    fluidFraction,
    sedimentMeltFraction,
    fluidResidue,
    own: Object.entries(options)
      .filter(([, value]) => typeof value === 'object' && !Array.isArray(value))
      .map(([name]) => name),
  };
  const members = {
    elements: [...elements],
    mantle,
    fluid,
    sedimentMelt,
    melting,
    notes,
    lineage: [step('wedgeEndMembers', detail, { sources: [...sources], tables: [...tables], fromMemory })],
  };
  return showAs(members, membersView);
}

/** N-MORB with what is known of altered crust put over it: the only complete composition that the tables allow. */
function alteredCrust(): Record<string, number> {
  const fresh = referenceComposition('n-morb-1989');
  const altered = referenceComposition('altered-crust-801-2003');
  const all = [...wedgeElements, ...rareEarths, 'K', 'Cs', 'Ta', 'Hf', 'P', 'Li'];
  return Object.fromEntries(
    all
      .map((element) => [element, altered.valueOf(element) ?? fresh.valueOf(element)])
      .filter((entry): entry is [string, number] => entry[1] !== undefined),
  );
}

function ofElements(what: string, elements: readonly string[], valueOf: (element: string) => number | undefined): Float64Array {
  const lacking = elements.filter((element) => valueOf(element) === undefined);
  if (lacking.length > 0)
    throw new RangeError(
      `wedgeEndMembers: ${what} has no ${lacking.join(', ')}. Leave them out of elements, or give a composition of your own with them.`,
    );
  return Float64Array.from(elements, (element) => valueOf(element)!);
}

function coefficientsOf(what: string, elements: readonly string[], sets: readonly (readonly [string, string])[], sources: Set<string>) {
  const measured = new Map<string, number>();
  for (const [source, solid] of sets) {
    for (const [element, row] of slabCoefficients(source, solid)) {
      if (measured.has(element)) continue;
      measured.set(element, row.value);
      sources.add(row.source);
      if (row.readIn !== '') sources.add(row.readIn);
    }
  }
  const interpolated: string[] = [];
  const coefficients = ofElements(`${what} (coefficient set ${sets.map(([source]) => source).join(', ')})`, elements, (element) => {
    const known = measured.get(element) ?? betweenNeighbours(element, measured);
    if (known !== undefined && !measured.has(element) && !interpolated.includes(element)) interpolated.push(element);
    return known;
  });
  return { coefficients, interpolated };
}

/** Adds the part of 1 % rutile to bulk coefficients of eclogite: what the rutile-bearing residue of Xiong (2006) holds beyond the other. */
function addRutile(elements: readonly string[], coefficients: Float64Array): void {
  const rutileShare = 0.01;
  const without = slabCoefficients('xiong_2006', 'cpx');
  const withRutile = slabCoefficients('xiong_2006', 'rutile');
  elements.forEach((element, e) => {
    const bare = without.get(element)?.value;
    const bearing = withRutile.get(element)?.value;
    // Where the two differ by rounding alone, rutile holds nothing worth adding.
    const part = bare === undefined || bearing === undefined ? 0 : Math.max(0, bearing - (1 - rutileShare) * bare);
    coefficients[e] = (1 - rutileShare) * coefficients[e] + part;
  });
}

/** A coefficient of a rare earth between its measured neighbours: ln D linear in ionic radius. */
function betweenNeighbours(element: string, measured: ReadonlyMap<string, number>): number | undefined {
  const at = (rareEarths as readonly string[]).indexOf(element);
  if (at < 0) return undefined;
  const lighter = rareEarths
    .slice(0, at)
    .reverse()
    .find((each) => measured.has(each));
  const heavier = rareEarths.slice(at + 1).find((each) => measured.has(each));
  if (lighter === undefined || heavier === undefined) return undefined;
  const part = (ionicRadius(lighter) - ionicRadius(element)) / (ionicRadius(lighter) - ionicRadius(heavier));
  return Math.exp((1 - part) * Math.log(measured.get(lighter)!) + part * Math.log(measured.get(heavier)!));
}

function ownMelting(elements: readonly string[], coefficients: Readonly<Record<string, number>>): WedgeEndMembers['melting'] {
  const startD = ofElements('mantleCoefficients', elements, (element) => (Object.hasOwn(coefficients, element) ? coefficients[element] : undefined));
  if (startD.some((value) => !(value > 0))) throw new RangeError('wedgeEndMembers: mantleCoefficients must be positive numbers.');
  const modal = { startD, reactionD: startD, holdsTo: 1 };
  return { spinel: modal, garnet: modal };
}

function publishedMelting(elements: readonly string[], sources: Set<string>, tables: Set<string>, notes: string[]): WedgeEndMembers['melting'] {
  tables.add('partition-coefficients.csv');
  tables.add('mantle-modes.csv');
  sources.add(mantleSource);
  notes.push(`mantle coefficients: ${mantleSource}; a coefficient that the set lacks counts as 0.`);
  const of = (which: MantleFacies): MantleMelting => {
    const mode = mantleMode('mode', faciesSource[which], which);
    const reaction = mantleMode('melting reaction', faciesSource[which], which);
    sources.add(mode.source);
    sources.add(reaction.source);
    const bulk = (element: string, minerals: ReadonlyMap<string, number>) => {
      let sum = 0;
      for (const [mineral, share] of minerals)
        sum += share * (coefficientsFor(mineral, 'mantle-melting', element).find(({ source }) => source === mantleSource)?.value ?? 0);
      return sum;
    };
    const known = (element: string) => coefficientsFor('clinopyroxene', 'mantle-melting', element).some(({ source }) => source === mantleSource);
    let holdsTo = 1;
    for (const [mineral, share] of reaction.minerals) if (share > 0) holdsTo = Math.min(holdsTo, (mode.minerals.get(mineral) ?? 0) / share);
    return {
      startD: ofElements('mantle coefficients', elements, (element) => (known(element) ? bulk(element, mode.minerals) : undefined)),
      reactionD: ofElements('mantle coefficients', elements, (element) => (known(element) ? bulk(element, reaction.minerals) : undefined)),
      holdsTo,
    };
  };
  return { spinel: of('spinel'), garnet: of('garnet') };
}

function membersView(members: Omit<WedgeEndMembers, keyof Showable>): TableView {
  const { elements, mantle, fluid, sedimentMelt, melting, notes } = members;
  const short = (value: number) => Number(value.toPrecision(4));
  return {
    title: 'End members of the fluxed wedge (ppm) and bulk coefficients of the mantle',
    columns: ['element', 'mantle', 'slab fluid', 'sediment melt', 'D0 spinel', 'P spinel', 'D0 garnet', 'P garnet'],
    rows: elements.map((element, e) => [
      element,
      ...[mantle, fluid, sedimentMelt, melting.spinel.startD, melting.spinel.reactionD, melting.garnet.startD, melting.garnet.reactionD].map(
        (values) => short(values[e]),
      ),
    ]),
    notes,
  };
}
