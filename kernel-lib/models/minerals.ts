import { majorOxides } from '../chemistry';
import { massFactor, mineralComposition, mineralCompositions, molarMass, type MineralComposition, type Standing } from '../tables';

/**
 * The composition of a mineral: a label of the tables (`augite, Stillwater complex, Montana`), a point of a solid solution (`Fo82`, `An64`,
 * `Wo42En44Fs14`, `Usp30`), either of them after a mineral's name (`plagioclase An64`), or an analysis of your own (oxides in wt %).
 */
export type MineralChoice = string | Readonly<Record<string, number>> | MineralComposition;

/** A mineral ready for a mass balance: its oxides, free of volatiles and with all iron as FeO, summing to 100 wt %. */
export interface ChosenMineral {
  readonly name: string;
  /** The mineral that coefficients are looked up under. */
  readonly mineral: string;
  readonly label: string;
  readonly oxides: ReadonlyMap<string, number>;
  /** Source key, or `supplied by the user`. */
  readonly source: string;
  readonly standing: Standing | 'supplied';
}

type Moles = Readonly<Record<string, number>>;

/** Moles of oxides for one formula unit along each solid solution, from the end members' ideal formulas. */
const solidSolutions: readonly {
  readonly mineral: string;
  readonly pattern: RegExp;
  readonly moles: (parts: readonly number[]) => Moles | undefined;
}[] = [
  { mineral: 'olivine', pattern: /^Fo(\d+(?:\.\d+)?)$/, moles: ([Fo]) => (Fo <= 100 ? { SiO2: 1, MgO: Fo / 50, FeO: 2 - Fo / 50 } : undefined) },
  {
    mineral: 'plagioclase',
    pattern: /^An(\d+(?:\.\d+)?)$/,
    moles: ([An]) => (An <= 100 ? { SiO2: 3 - An / 100, Al2O3: (1 + An / 100) / 2, CaO: An / 100, Na2O: (1 - An / 100) / 2 } : undefined),
  },
  ...['clinopyroxene', 'orthopyroxene'].map((mineral) => ({
    mineral,
    pattern: /^Wo(\d+(?:\.\d+)?)En(\d+(?:\.\d+)?)Fs(\d+(?:\.\d+)?)$/,
    moles: ([Wo, En, Fs]: readonly number[]) =>
      Math.abs(Wo + En + Fs - 100) <= 1.5 ? { SiO2: (Wo + En + Fs) / 50, CaO: Wo / 50, MgO: En / 50, FeO: Fs / 50 } : undefined,
  })),
  {
    mineral: 'magnetite',
    pattern: /^(?:titanomagnetite )?Usp(\d+(?:\.\d+)?)$/,
    moles: ([Usp]) => (Usp <= 100 ? { TiO2: Usp / 100, FeO: 1 + Usp / 100, Fe2O3: 1 - Usp / 100 } : undefined),
  },
  {
    mineral: 'ilmenite',
    pattern: /^Ilm(\d+(?:\.\d+)?)$/,
    moles: ([Ilm]) => (Ilm <= 100 ? { TiO2: Ilm / 100, FeO: Ilm / 100, Fe2O3: 1 - Ilm / 100 } : undefined),
  },
];

/**
 * A point of a solid solution from ideal formulas: olivine `Fo82`, plagioclase `An64`, pyroxenes `Wo42En44Fs14`, magnetite `Usp30`,
 * ilmenite `Ilm90`.
 *
 * @returns oxides in wt %, or undefined when the label is not such a point
 * @throws RangeError when the parts of a label do not add up
 * @example solidSolution('olivine', 'Fo90')!.get('MgO') // 49.35
 */
export function solidSolution(mineral: string, label: string): ReadonlyMap<string, number> | undefined {
  for (const each of solidSolutions) {
    const match = each.mineral === mineral ? each.pattern.exec(label) : null;
    if (match === null) continue;
    const moles = each.moles(match.slice(1).map(Number));
    if (moles === undefined) throw new RangeError(`${mineral} ${label}: a part is above 100, or the parts do not sum to 100.`);
    const masses = Object.entries(moles).map(([oxide, amount]) => [oxide, amount * molarMass(oxide)] as const);
    const sum = masses.reduce((total, [, mass]) => total + mass, 0);
    return new Map(masses.filter(([, mass]) => mass > 0).map(([oxide, mass]) => [oxide, (100 * mass) / sum]));
  }
  return undefined;
}

const known = (mineral: string): boolean => mineralCompositions().some((entry) => entry.mineral === mineral);

/** The mineral that a name begins with: `plagioclase`, `plagioclase 2` and `plagioclase rim` are all plagioclase. */
export function mineralOf(name: string): string {
  return (
    [...new Set(mineralCompositions().map((entry) => entry.mineral))].find((mineral) => name === mineral || name.startsWith(`${mineral} `)) ?? name
  );
}

function lookUp(name: string, choice: string): Omit<ChosenMineral, 'name' | 'oxides'> & { raw: ReadonlyMap<string, number> } {
  const listed = (mineral: string, label: string) => mineralCompositions().some((entry) => entry.mineral === mineral && entry.label === label);
  const named = mineralOf(choice);
  // A label may itself begin with a mineral's name (biotite "biotite Mg#0.60"), so the label as it stands is tried first.
  const isNamed = named !== choice && known(named) && !listed(mineralOf(name), choice);
  const [mineral, label] = isNamed ? [named, choice.slice(named.length + 1)] : [mineralOf(name), choice];
  const point = solidSolution(mineral, label);
  if (point !== undefined) return { mineral, label, raw: point, source: 'prohaska_2022', standing: 'computed' };
  const entry = mineralComposition(mineral, label);
  return { mineral, label, raw: entry.oxides, source: entry.source, standing: entry.standing };
}

/** @internal Reads a mineral's composition. `name` is what the user calls the phase. */
export function chooseMineral(name: string, choice: MineralChoice | undefined, who: string): ChosenMineral {
  if (choice === undefined) {
    const labels = mineralCompositions().filter((entry) => entry.mineral === mineralOf(name));
    if (labels.length === 1) return chooseMineral(name, labels[0], who);
    const list = labels.map(({ label }) => `"${label}"`).join(', ');
    const advice =
      labels.length === 0 ? 'Give an analysis: oxides in wt %.' : `Choose from the tables (${list}), a point of its solid solution, or an analysis.`;
    throw new RangeError(`${who}: the composition of ${name} is not given. ${advice}`);
  }
  if (typeof choice === 'string') {
    const { raw, ...rest } = lookUp(name, choice);
    return { name, ...rest, oxides: onBasis(raw, `${who}: ${name}`) };
  }
  if (typeof choice !== 'object' || choice === null)
    throw new TypeError(`${who}: the composition of ${name} must be a label or an object of oxides in wt %.`);
  if (choice.oxides instanceof Map) {
    const entry = choice as MineralComposition;
    return {
      name,
      mineral: entry.mineral,
      label: entry.label,
      oxides: onBasis(entry.oxides, `${who}: ${name}`),
      source: entry.source,
      standing: entry.standing,
    };
  }
  const raw = new Map<string, number>();
  for (const [oxide, value] of Object.entries(choice as Readonly<Record<string, number>>)) {
    if (typeof value !== 'number' || !Number.isFinite(value) || value < 0)
      throw new RangeError(`${who}: ${oxide} of ${name} is ${String(value)}; give wt %.`);
    raw.set(oxide, value);
  }
  return {
    name,
    mineral: mineralOf(name),
    label: 'own analysis',
    oxides: onBasis(raw, `${who}: ${name}`),
    source: 'supplied by the user',
    standing: 'supplied',
  };
}

/** Oxides that stay on the volatile-free basis besides the ten majors. */
const others = ['Cr2O3', 'NiO', 'ZrO2'];

/** Free of H2O, F and Cl, all iron as FeO, scaled to 100 wt %. */
function onBasis(raw: ReadonlyMap<string, number>, what: string): ReadonlyMap<string, number> {
  const oxides = new Map<string, number>();
  for (const oxide of [...majorOxides, ...others]) {
    const value =
      oxide === 'FeOT'
        ? (raw.get('FeOT') ?? (raw.get('FeO') ?? 0) + ((raw.get('Fe2O3') ?? 0) + (raw.get('Fe2O3T') ?? 0)) * massFactor('Fe2O3', 'FeO'))
        : (raw.get(oxide) ?? 0);
    if (value > 0) oxides.set(oxide, value);
  }
  const sum = [...oxides.values()].reduce((total, value) => total + value, 0);
  if (!(sum > 50)) throw new RangeError(`${what}: its oxides sum to ${Number(sum.toPrecision(4))} wt %; give a whole analysis, in wt %.`);
  return new Map([...oxides].map(([oxide, value]) => [oxide, (100 * value) / sum]));
}
