/**
 * What kind of quantity a column holds. Oxides are kept in wt %, elements in ppm, isotope ratios are bare numbers; `quantity` is
 * anything else that has a number (a total, a ratio, an index, an epsilon value), with the unit written beside it.
 */
export type AnalyteKind = 'oxide' | 'element' | 'isotope-ratio' | 'quantity';

/** One measurable quantity: canonical symbol, kind and canonical unit ('' for a bare number). */
export interface Analyte {
  readonly symbol: string;
  readonly kind: AnalyteKind;
  readonly unit: string;
}

/** The ten oxides that make up a lava's major-element analysis, in the trade's usual order, total iron as FeO. */
export const majorOxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'] as const;

/** Rare earth elements by atomic number; Pm does not occur. */
export const rareEarths = ['La', 'Ce', 'Pr', 'Nd', 'Sm', 'Eu', 'Gd', 'Tb', 'Dy', 'Ho', 'Er', 'Tm', 'Yb', 'Lu'] as const;

/** The formula behind a symbol whose name says more than the formula: total iron, structural and adsorbed water. */
const formulaOfSymbol: Readonly<Record<string, string>> = { FeOT: 'FeO', Fe2O3T: 'Fe2O3', 'H2O+': 'H2O', 'H2O-': 'H2O' };

const oxideSymbols = [
  'SiO2', 'TiO2', 'Al2O3', 'Cr2O3', 'Fe2O3', 'FeO', 'FeOT', 'Fe2O3T', 'MnO', 'NiO', 'CoO', 'MgO', 'CaO', 'SrO', 'BaO', 'Na2O', 'K2O', 'Rb2O',
  'P2O5', 'V2O5', 'ZrO2', 'SO3', 'CO2', 'H2O', 'H2O+', 'H2O-', 'ZnO', 'CuO', 'Li2O', 'B2O3', 'La2O3', 'Ce2O3', 'Nb2O5', 'Y2O3', 'Sc2O3',
  'HfO2', 'ThO2', 'UO2', 'PbO', 'Ga2O3', 'SnO2', 'WO3', 'MoO3', 'As2O3', 'BeO', 'Cs2O',
] as const;

const elementSymbols =
  ('H Li Be B C N O F Na Mg Al Si P S Cl K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br Rb Sr Y Zr Nb Mo Ru Rh Pd Ag Cd In Sn Sb Te I Cs Ba ' +
    'La Ce Pr Nd Sm Eu Gd Tb Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Th U').split(' ');

const isotopeRatios = [
  '87Sr/86Sr', '143Nd/144Nd', '176Hf/177Hf', '206Pb/204Pb', '207Pb/204Pb', '208Pb/204Pb', '187Os/188Os', '87Rb/86Sr', '147Sm/144Nd', '176Lu/177Hf',
] as const;

const bySymbol: ReadonlyMap<string, Analyte> = new Map<string, Analyte>([
  ...oxideSymbols.map((symbol): [string, Analyte] => [symbol, { symbol, kind: 'oxide', unit: 'wt%' }]),
  ...elementSymbols.map((symbol): [string, Analyte] => [symbol, { symbol, kind: 'element', unit: 'ppm' }]),
  ...isotopeRatios.map((symbol): [string, Analyte] => [symbol, { symbol, kind: 'isotope-ratio', unit: '' }]),
  ['LOI', { symbol: 'LOI', kind: 'quantity', unit: 'wt%' }],
  ['Total', { symbol: 'Total', kind: 'quantity', unit: 'wt%' }],
  ['epsilon-Nd', { symbol: 'epsilon-Nd', kind: 'quantity', unit: '' }],
  ['epsilon-Hf', { symbol: 'epsilon-Hf', kind: 'quantity', unit: '' }],
]);

/** Every analyte the library knows by its canonical symbol. */
export const knownAnalytes: readonly Analyte[] = [...bySymbol.values()];

/** The analyte of a canonical symbol, or undefined when the library does not know it. */
export function findAnalyte(symbol: string): Analyte | undefined {
  return bySymbol.get(symbol);
}

/** The chemical formula behind an oxide or element symbol: `FeOT` → `FeO`, `H2O+` → `H2O`, `Ba` → `Ba`. */
export function formulaOf(symbol: string): string {
  return Object.hasOwn(formulaOfSymbol, symbol) ? formulaOfSymbol[symbol] : symbol;
}

/**
 * The oxide in which each cation is usually reported (oxides of iron stand for total iron), for conversions between an element in ppm
 * and its oxide in wt %.
 */
const usualOxide: ReadonlyMap<string, string> = new Map(
  ([
    'SiO2', 'TiO2', 'Al2O3', 'Cr2O3', 'MnO', 'NiO', 'CoO', 'MgO', 'CaO', 'SrO', 'BaO', 'Na2O', 'K2O', 'Rb2O', 'P2O5', 'V2O5', 'ZrO2', 'SO3', 'CO2',
    'ZnO', 'CuO', 'Li2O', 'B2O3', 'La2O3', 'Ce2O3', 'Nb2O5', 'Y2O3', 'Sc2O3', 'HfO2', 'ThO2', 'UO2', 'PbO', 'Ga2O3', 'SnO2', 'WO3', 'MoO3', 'As2O3',
    'BeO', 'Cs2O',
  ] as const).map((oxide): [string, string] => [/^[A-Z][a-z]?/.exec(oxide)![0], oxide]),
);

/** The oxide that an element is usually reported as (`Ti` → `TiO2`), or undefined. Iron has two, so it has none here. */
export function oxideOfElement(element: string): string | undefined {
  return usualOxide.get(element);
}

/** The cation element of an oxide (`TiO2` → `Ti`, `FeOT` → `Fe`), or undefined for something that is not an oxide. */
export function elementOfOxide(oxide: string): string | undefined {
  const analyte = bySymbol.get(oxide);
  return analyte?.kind === 'oxide' ? /^[A-Z][a-z]?/.exec(oxide)![0] : undefined;
}
