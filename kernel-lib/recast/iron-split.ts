import { cellState, column, resolveColumn, step, suiteOf, type Column, type Suite } from '../suite';
import { massFactor, molarMass } from '../tables';
import { bufferFugacity, ferricFerrousRatio, meltOxides, oxygenBuffers, type OxygenBuffer } from './iron-redox';
import { ironTables } from './iron-tables';
import { totalIron } from './total-iron';

/** A method that splits total iron into FeO and Fe2O3. */
export type IronSplitMethod = 'measured' | 'fixed' | 'le-maitre-1976' | 'middlemost-1989' | 'kress-carmichael-1991';

/** How total iron is split. */
export interface IronSplitOptions {
  /**
   * `measured`: both oxides as measured, rows without both by `otherwise`; `fixed`: one Fe2O3/FeO by weight; `le-maitre-1976`: from SiO2 and
   * alkalis; `middlemost-1989`: Fe2O3/FeO by TAS field; `kress-carmichael-1991`: melt equilibrium at a temperature, pressure and fO2.
   * Default `measured`, otherwise `le-maitre-1976`.
   */
  readonly method?: IronSplitMethod;
  /** For `measured`: what rows without both oxides get (default `le-maitre-1976`; `none` leaves them without). */
  readonly otherwise?: 'le-maitre-1976' | 'fixed' | 'middlemost-1989' | 'none';
  /** Fe2O3/FeO by weight, for `fixed`. */
  readonly ratio?: number;
  /** TAS symbol of every sample, for `middlemost-1989` (default: the suite's label `tas`). */
  readonly fields?: readonly string[];
  /** °C: a number, or the symbol of a column; for `kress-carmichael-1991`. */
  readonly temperature?: number | string;
  /** bar (default 1): a number, or the symbol of a column. */
  readonly pressure?: number | string;
  /** Oxygen: a buffer with an offset in log10 units, or log10 fO2 itself (bar). */
  readonly oxygen?: { readonly buffer: OxygenBuffer; readonly offset?: number } | { readonly log10fO2: number };
}

const methods: readonly IronSplitMethod[] = ['measured', 'fixed', 'le-maitre-1976', 'middlemost-1989', 'kress-carmichael-1991'];

const sourceOf: Readonly<Partial<Record<IronSplitMethod | 'none', () => { source: string; standing: string; what: string }>>> = {
  'le-maitre-1976': () => ironTables().silicaAndAlkalis,
  'middlemost-1989': () => ironTables().ratioByField,
  'kress-carmichael-1991': () => ironTables().meltEquilibrium,
};

const inWords: Readonly<Record<IronSplitMethod, string>> = {
  measured: 'FeO and Fe2O3 as measured',
  fixed: 'total iron split at a fixed Fe2O3/FeO',
  'le-maitre-1976': 'total iron split by silica and alkalis after Le Maitre (1976)',
  'middlemost-1989': 'total iron split by rock type after Middlemost (1989)',
  'kress-carmichael-1991': 'total iron split by melt equilibrium after Kress and Carmichael (1991)',
};

/**
 * Total iron split into FeO and Fe2O3.
 *
 * @param suite n samples with iron in any form, wt %
 * @param options see `IronSplitOptions`
 * @returns the suite with `FeO` and `Fe2O3` (wt %, n; NaN where the method has no answer) in place of every other form of iron; the step says
 *   the method, and how many rows each way
 * @throws RangeError for an unknown method, or one that lacks what it needs (ratio, fields, temperature, oxygen)
 * @source Le Maitre 1976; Middlemost 1989; Kress & Carmichael 1991; Frost 1991 (buffers)
 * @example splitIron(suite, { method: 'kress-carmichael-1991', temperature: 1100, oxygen: { buffer: 'NNO', offset: 0.5 } })
 */
export function splitIron(suite: Suite, options: IronSplitOptions = {}): Suite {
  const { method = 'measured', otherwise = 'le-maitre-1976' } = options;
  if (!methods.includes(method)) throw new RangeError(`splitIron: method must be one of ${methods.join(', ')}, not "${String(method)}".`);
  if (otherwise !== 'none' && !['le-maitre-1976', 'fixed', 'middlemost-1989'].includes(otherwise)) {
    throw new RangeError(`splitIron: otherwise must be "le-maitre-1976", "fixed", "middlemost-1989" or "none", not "${String(otherwise)}".`);
  }
  const total = totalIron(suite).column;
  const size = suite.size;
  const applied = method === 'measured' ? otherwise : method;
  // Share of total iron (as FeO) that is FeO, for rows the measured oxides do not decide.
  const share = applied === 'none' ? new Float64Array(size).fill(NaN) : shareOfFerrous(suite, total, applied, options);
  const ferrous = suite.columns.get('FeO');
  const ferric = suite.columns.get('Fe2O3');
  const toFerric = massFactor('FeO', 'Fe2O3');
  const feo = new Float64Array(size).fill(NaN);
  const fe2o3 = new Float64Array(size).fill(NaN);
  const states = new Uint8Array(size).fill(cellState.missing);
  const counts = { measured: 0, split: 0, none: 0 };
  for (let i = 0; i < size; i++) {
    if (method === 'measured' && Number.isFinite(ferrous?.values[i]) && Number.isFinite(ferric?.values[i])) {
      feo[i] = ferrous!.values[i];
      fe2o3[i] = ferric!.values[i];
      states[i] = cellState.measured;
      counts.measured++;
      continue;
    }
    const part = share[i];
    if (!(part >= 0 && part <= 1) || !Number.isFinite(total.values[i])) {
      counts.none++;
      continue;
    }
    feo[i] = total.values[i] * part;
    fe2o3[i] = total.values[i] * (1 - part) * toFerric;
    states[i] = cellState.derived;
    counts.split++;
  }
  const sigma = (values: Float64Array) => total.sigma?.map((each, i) => (each / total.values[i]) * values[i]);
  const columns = new Map([...suite.columns].filter(([symbol]) => symbol !== 'FeOT' && symbol !== 'Fe2O3T'));
  columns.set('FeO', column({ symbol: 'FeO', values: feo, states, sigma: sigma(feo) }));
  columns.set('Fe2O3', column({ symbol: 'Fe2O3', values: fe2o3, states: states.slice(), sigma: sigma(fe2o3) }));
  const published = sourceOf[applied]?.();
  const sources = [
    ...(published === undefined ? [] : [published.source]),
    ...(options.oxygen !== undefined && 'buffer' in options.oxygen ? [ironTables().buffers.source] : []),
  ];
  const { fields: _fields, ...detail } = options;
  const because = step(
    'splitIron',
    { ...(detail as Record<string, never>), method, ...(method === 'measured' ? { otherwise } : {}), rows: counts },
    {
      sources,
      tables: published === undefined ? [] : ['iron-oxidation.json'],
      fromMemory: published?.standing === 'from memory' ? [published.what] : [],
      says: `Iron: ${inWords[method]}${method === 'measured' && otherwise !== 'none' && counts.split > 0 ? `; where not measured, ${inWords[otherwise]}` : ''}.`,
    },
  );
  return suiteOf({ columns: columns.values(), labels: suite.labels, lineage: [...suite.lineage, because] });
}

function shareOfFerrous(suite: Suite, total: Column, method: Exclude<IronSplitMethod, 'measured'>, options: IronSplitOptions): Float64Array {
  const size = suite.size;
  const share = new Float64Array(size).fill(NaN);
  const perFerric = massFactor('Fe2O3', 'FeO');
  // From Fe2O3/FeO by weight: total = FeO + factor·Fe2O3.
  const ofRatio = (ratio: number) => 1 / (1 + perFerric * ratio);
  switch (method) {
    case 'fixed': {
      const { ratio } = options;
      if (!(typeof ratio === 'number' && ratio >= 0 && Number.isFinite(ratio))) {
        throw new RangeError(`splitIron: method "fixed" needs ratio, the Fe2O3/FeO by weight (0 or more), not ${String(ratio)}.`);
      }
      return share.fill(ofRatio(ratio));
    }
    case 'le-maitre-1976': {
      const { constant, perSilica, perAlkalis } = ironTables().silicaAndAlkalis;
      const [silica, soda, potash] = ['SiO2', 'Na2O', 'K2O'].map((symbol) => resolveColumn(suite, symbol)?.values);
      if (silica === undefined || soda === undefined || potash === undefined) return share;
      for (let i = 0; i < size; i++) {
        const part = constant + perSilica * silica[i] + perAlkalis * (soda[i] + potash[i]);
        share[i] = ofRatio((1 - part) / part);
      }
      return share;
    }
    case 'middlemost-1989': {
      const fields = options.fields ?? suite.labels.get('tas');
      if (fields === undefined || fields.length !== size) {
        throw new RangeError('splitIron: method "middlemost-1989" needs fields, the TAS symbol of every sample (or the label "tas" on the suite).');
      }
      const { ratios } = ironTables().ratioByField;
      fields.forEach((field, i) => {
        if (Object.hasOwn(ratios, field)) share[i] = ofRatio(ratios[field]);
      });
      return share;
    }
    case 'kress-carmichael-1991':
      return shareByMelt(suite, total, options, share);
  }
}

function shareByMelt(suite: Suite, total: Column, { temperature, pressure = 1, oxygen }: IronSplitOptions, share: Float64Array): Float64Array {
  if (temperature === undefined)
    throw new RangeError('splitIron: method "kress-carmichael-1991" needs temperature in °C (a number, or the symbol of a column).');
  const known = oxygen !== undefined && ('log10fO2' in oxygen ? Number.isFinite(oxygen.log10fO2) : oxygenBuffers.includes(oxygen.buffer));
  if (!known)
    throw new RangeError(
      `splitIron: method "kress-carmichael-1991" needs oxygen: { buffer: ${oxygenBuffers.map((name) => `"${name}"`).join(' | ')}, offset } or { log10fO2 }.`,
    );
  const at = (given: number | string): ((i: number) => number) => {
    if (typeof given === 'number') return () => given;
    const { values } = suite.column(given);
    return (i) => values[i];
  };
  const celsius = at(temperature);
  const bar = at(pressure);
  const values = meltOxides.map((oxide) => (oxide === 'FeOT' ? total.values : resolveColumn(suite, oxide)?.values));
  const oxides: Record<string, number> = {};
  for (let i = 0; i < share.length; i++) {
    if (!Number.isFinite(celsius(i)) || !Number.isFinite(bar(i))) continue;
    meltOxides.forEach((oxide, j) => (oxides[oxide] = values[j]?.[i] ?? 0));
    const log10fO2 = 'log10fO2' in oxygen! ? oxygen.log10fO2 : bufferFugacity(oxygen!.buffer, celsius(i), bar(i), oxygen!.offset ?? 0);
    const molar = Math.exp(ferricFerrousRatio(oxides, { temperature: celsius(i), pressure: bar(i), log10fO2 }));
    share[i] = 1 / (1 + 2 * molar);
  }
  return share;
}

/** Share of iron that is ferric, Fe³⁺/ΣFe (molar), of FeO and Fe2O3 in wt %. */
export function ferricShare(ferrous: number, ferric: number): number {
  const three = (2 * ferric) / molarMass('Fe2O3');
  return three / (three + ferrous / molarMass('FeO'));
}
