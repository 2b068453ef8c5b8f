import { derivedColumn, resolveColumn, step, type Suite } from '../suite';
import { volatileFree } from '../recast';
import { atomicWeight, shortSource } from '../tables';
import { celsius, cationFractions, majors, place } from './liquid-state';
import { majorOxides } from '../chemistry';
import { saturationTable } from './melt-tables';

/** Which calibration of zircon saturation. */
export type ZirconModel = 'watson-harrison-1983' | 'boehnke-2013' | 'shao-2020';

const zirconModels: readonly ZirconModel[] = ['watson-harrison-1983', 'boehnke-2013', 'shao-2020'];

/** ppm of Zr in pure zircon, from its formula. */
export function zirconiumInZircon(): number {
  const [zr, si, o] = ['Zr', 'Si', 'O'].map(atomicWeight);
  return (1e6 * zr) / (zr + si + 4 * o);
}

function zirconTable(model: ZirconModel, who: string) {
  if (!zirconModels.includes(model)) throw new RangeError(`${who}: model must be one of ${zirconModels.join(', ')}, not "${String(model)}".`);
  return saturationTable().zircon[model];
}

/**
 * Zr in a melt saturated with zircon.
 *
 * @param M (Na + K + 2 Ca)/(Al·Si), cation fractions
 * @param temperature °C
 * @param model `watson-harrison-1983`, `boehnke-2013` (default) or `shao-2020`
 * @returns ppm
 * @source Watson & Harrison 1983; Boehnke et al. 2013; Shao et al. 2020
 * @example zirconSolubility(1.3, 800) // 251 ppm
 */
export function zirconSolubility(M: number, temperature: number, model: ZirconModel = 'boehnke-2013'): number {
  const { constant, perM, perInverseT } = zirconTable(model, 'zirconSolubility');
  const T = temperature + celsius;
  return model === 'shao-2020'
    ? Math.exp(constant + perM * M + perInverseT / T)
    : zirconiumInZircon() / Math.exp(constant + perM * (M - 1) + perInverseT / T);
}

/** The temperature (°C) at which a melt with this Zr (ppm) is saturated with zircon; inverse of `zirconSolubility`. */
export function zirconTemperature(M: number, zirconium: number, model: ZirconModel = 'boehnke-2013'): number {
  const { constant, perM, perInverseT } = zirconTable(model, 'zirconTemperature');
  if (model === 'shao-2020') return perInverseT / (Math.log(zirconium) - constant - perM * M) - celsius;
  return perInverseT / (Math.log(zirconiumInZircon() / zirconium) - constant - perM * (M - 1)) - celsius;
}

/**
 * P2O5 in a melt saturated with apatite.
 *
 * @param silica SiO2, wt %
 * @param temperature °C
 * @returns wt %
 * @source Harrison & Watson 1984; metaluminous melts
 * @example apatiteSolubility(70, 900) // 0.096 wt %
 */
export function apatiteSolubility(silica: number, temperature: number): number {
  const { a, b, c, d, inApatite } = saturationTable().apatite;
  const over = silica / 100 - 0.5;
  return inApatite / Math.exp((a + b * over) / (temperature + celsius) - (c + d * over));
}

/** The temperature (°C) at which a melt with this SiO2 and P2O5 (wt %) is saturated with apatite. */
export function apatiteTemperature(silica: number, phosphorus: number): number {
  const { a, b, c, d, inApatite } = saturationTable().apatite;
  const over = silica / 100 - 0.5;
  return (a + b * over) / (Math.log(inApatite / phosphorus) + c + d * over) - celsius;
}

const scratch = new Float64Array(majors);

/** @internal M = (Na + K + 2 Ca)/(Al·Si) of a liquid (wt % in the majors' order). */
export function zirconM(oxides: ArrayLike<number>): number {
  const X = cationFractions(oxides, scratch);
  return (X[place.Na2O] + X[place.K2O] + 2 * X[place.CaO]) / (X[place.Al2O3] * X[place.SiO2]);
}

/**
 * Temperatures at which each analysis, taken as a liquid, is saturated with zircon and with apatite.
 *
 * @param suite n analyses with majors (wt %), Zr (ppm) and P2O5 (wt %)
 * @param options `model` of zircon saturation (default `boehnke-2013`)
 * @returns the suite with `M`, `zircon saturation` and `apatite saturation` (°C, n; NaN where an analyte is missing) and the label `saturation range`
 *   (what is outside the calibration). A saturation temperature is the magma's only if it was saturated: else a lower limit
 * @throws RangeError for an unknown model
 * @source Watson & Harrison 1983; Boehnke et al. 2013; Shao et al. 2020; Harrison & Watson 1984
 */
export function withSaturationTemperatures(suite: Suite, options: { readonly model?: ZirconModel } = {}): Suite {
  const model = options.model ?? 'boehnke-2013';
  const table = zirconTable(model, 'withSaturationTemperatures');
  const { apatite } = saturationTable();
  const dry = volatileFree(suite);
  const columns = majorOxides.map((oxide) => resolveColumn(dry, oxide)?.values);
  const zirconium = resolveColumn(suite, 'Zr')?.values;
  const size = suite.size;
  const [Ms, zirconT, apatiteT] = [0, 0, 0].map(() => new Float64Array(size).fill(NaN));
  const flags: string[] = [];
  const oxides = new Float64Array(majors);
  for (let i = 0; i < size; i++) {
    const outside: string[] = [];
    for (let j = 0; j < majors; j++) oxides[j] = columns[j]?.[i] || 0;
    const silica = columns[place.SiO2]?.[i] ?? NaN;
    if (Number.isFinite(silica)) {
      Ms[i] = zirconM(oxides);
      if (zirconium !== undefined && zirconium[i] > 0) {
        zirconT[i] = zirconTemperature(Ms[i], zirconium[i], model);
        if (Ms[i] < table.range.M[0] || Ms[i] > table.range.M[1]) outside.push(`zircon: M outside ${table.range.M.join('–')}`);
      }
      if (oxides[place.P2O5] > 0) {
        apatiteT[i] = apatiteTemperature(silica, oxides[place.P2O5]);
        if (silica < apatite.range.SiO2[0] || silica > apatite.range.SiO2[1])
          outside.push(`apatite: SiO2 outside ${apatite.range.SiO2.join('–')} wt %`);
      }
    }
    flags.push(outside.join('; '));
  }
  const because = step(
    'withSaturationTemperatures',
    { model },
    {
      sources: [table.source, apatite.source],
      tables: ['saturation.json', 'atomic-weights.csv'],
      fromMemory: [table, apatite].filter(({ standing }) => standing === 'from memory').map(({ source }) => `saturation constants (${shortSource(source)})`),
      says: `Zircon saturation temperatures follow ${shortSource(table.source)}, apatite saturation ${shortSource(apatite.source)}.`,
    },
  );
  return suite
    .with(
      [derivedColumn('M', Ms, ''), derivedColumn('zircon saturation', zirconT, '°C'), derivedColumn('apatite saturation', apatiteT, '°C')],
      because,
    )
    .withLabels({ 'saturation range': flags });
}
