import { findAnalyte, isMassUnit, massUnitFactor } from '../chemistry';
import { equivalentSymbols, massFactor, reservoir, reservoirUnit, shortSource, type Reservoir, type ReservoirValue } from '../tables';

/**
 * What values may be divided by: the key of a reservoir (`chondrite-c1-1989`), a reservoir, or your own values by symbol (elements in ppm,
 * oxides in wt %).
 */
export type ReferenceComposition = string | Reservoir | Readonly<Record<string, number>>;

/**
 * Which Cs and Pb of the primitive mantle of Sun & McDonough (1989) to divide by: the authors give one pair in the table proper (0.032,
 * 0.185 ppm) and recommend another for plotting oceanic basalts (0.0079, 0.071 ppm).
 */
export type CaesiumLeadChoice = 'plotting' | 'table';

/** A reference composition made ready for division. */
export interface Reference {
  /** Reservoir key, or `own values`. */
  readonly key: string;
  readonly name: string;
  /** The value of an analyte in its canonical unit, from whichever form the table holds; undefined where it has none. */
  readonly valueOf: (symbol: string) => number | undefined;
  /** Source keys of the values. */
  readonly sources: readonly string[];
  /** Tables behind the values (empty for own values). */
  readonly tables: readonly string[];
  /** How far the values have been checked: the standings that occur. */
  readonly standings: readonly string[];
  /** Those of the named analytes whose values are from memory, as one line to check: `C1 chondrite: La 0.237, Ce 0.612 (Sun & McDonough 1989)`. */
  readonly fromMemory: (symbols: Iterable<string>) => readonly string[];
  /** What a reader must know, e.g. which Cs and Pb were taken. */
  readonly notes: readonly string[];
}

/** The reservoirs that normalisation takes when none is named. */
export const usualReferences = { rareEarths: 'chondrite-c1-1989', multiElement: 'primitive-mantle-1989' } as const;

/**
 * A reference composition made ready for division.
 *
 * @param from reservoir key, reservoir, or own values (elements ppm, oxides wt %)
 * @param options `caesiumAndLead`: which values of the 1989 primitive mantle to take (default `plotting`)
 * @throws RangeError for an unknown key, an unknown choice, or an own value that is not a positive number
 * @example referenceComposition('chondrite-c1-1989').valueOf('La') // 0.237
 */
export function referenceComposition(from: ReferenceComposition, options: { readonly caesiumAndLead?: CaesiumLeadChoice } = {}): Reference {
  const { caesiumAndLead = 'plotting' } = options;
  if (caesiumAndLead !== 'plotting' && caesiumAndLead !== 'table') {
    throw new RangeError(`caesiumAndLead must be "plotting" or "table", not "${String(caesiumAndLead)}".`);
  }
  if (typeof from === 'string') return ofReservoir(reservoir(from), caesiumAndLead);
  if (typeof from !== 'object' || from === null)
    throw new TypeError(`A reference is the key of a reservoir, a reservoir, or values by symbol; this is ${String(from)}.`);
  return isReservoir(from) ? ofReservoir(from, caesiumAndLead) : ofOwnValues(from);
}

function isReservoir(from: object): from is Reservoir {
  return (from as Partial<Reservoir>).values instanceof Map;
}

function ofOwnValues(values: Readonly<Record<string, number>>): Reference {
  for (const [symbol, value] of Object.entries(values)) {
    if (!(Number.isFinite(value) && value > 0))
      throw new RangeError(`Reference value of ${symbol} is ${String(value)}; give a positive number (elements ppm, oxides wt %).`);
  }
  const own = (symbol: string): number | undefined => (Object.hasOwn(values, symbol) ? values[symbol] : undefined);
  return {
    key: 'own values',
    name: 'own values',
    valueOf: (symbol) => own(symbol) ?? converted(symbol, own),
    sources: [],
    tables: [],
    standings: [],
    fromMemory: () => [],
    notes: [],
  };
}

function ofReservoir(found: Reservoir, caesiumAndLead: CaesiumLeadChoice): Reference {
  const plotting = [...found.values.keys()].filter((symbol) => symbol.endsWith('_recommended'));
  const pick = (symbol: string): ReservoirValue | undefined =>
    (caesiumAndLead === 'plotting' ? found.values.get(`${symbol}_recommended`) : undefined) ?? found.values.get(symbol);
  const direct = (symbol: string): number | undefined => {
    const entry = pick(symbol);
    return entry === undefined ? undefined : inCanonicalUnit(symbol, entry);
  };
  const values = [...found.values.values()];
  const notes = plotting.map((symbol) => {
    const element = symbol.replace('_recommended', '');
    const which = caesiumAndLead === 'plotting' ? 'the value recommended for plotting' : 'the table value';
    return `${element} of ${found.name}: ${direct(element)} ppm, ${which}.`;
  });
  return {
    key: found.key,
    name: found.name,
    valueOf: (symbol) => direct(symbol) ?? converted(symbol, direct),
    sources: [...new Set(values.map(({ source }) => source))],
    tables: ['reservoirs.csv'],
    standings: [...new Set(values.map(({ standing }) => standing))],
    fromMemory: (symbols) => {
      const recalled = [...new Set(symbols)]
        .map((symbol) => ({ symbol, entry: pick(symbol) ?? otherForm(symbol, pick) }))
        .filter(({ entry }) => entry?.standing === 'from memory');
      if (recalled.length === 0) return [];
      const cited = [...new Set(recalled.map(({ entry }) => shortSource(entry!.source)))].join('; ');
      const value = ({ analyte, value: number, unit }: ReservoirValue) =>
        `${analyte.replace('_recommended', '')} ${number}${unit === 'ratio' ? '' : ` ${unit}`}`;
      return [`${found.name}: ${recalled.map(({ entry }) => value(entry!)).join(', ')} (${cited})`];
    },
    notes,
  };
}

function otherForm(symbol: string, pick: (symbol: string) => ReservoirValue | undefined): ReservoirValue | undefined {
  return equivalentSymbols(symbol)
    .map(pick)
    .find((entry) => entry !== undefined);
}

function inCanonicalUnit(symbol: string, entry: ReservoirValue): number {
  const unit = findAnalyte(symbol)?.unit ?? reservoirUnit(entry);
  return isMassUnit(entry.unit) && isMassUnit(unit) ? entry.value * massUnitFactor(entry.unit, unit) : entry.value;
}

/** A value from its other form: Ti (ppm) from TiO2 (wt %), K2O from K. */
function converted(symbol: string, valueOf: (symbol: string) => number | undefined): number | undefined {
  for (const other of equivalentSymbols(symbol)) {
    const value = valueOf(other);
    const from = findAnalyte(other)?.unit;
    const to = findAnalyte(symbol)?.unit;
    if (value !== undefined && from !== undefined && to !== undefined && isMassUnit(from) && isMassUnit(to)) {
      return value * massFactor(other, symbol) * massUnitFactor(from, to);
    }
  }
  return undefined;
}
