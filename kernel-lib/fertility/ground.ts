import { volatileFree } from '../recast';
import { cellState, derivedColumn, resolveColumn, type Column, type Suite } from '../suite';
import { ConditionReader } from './conditions';

/** The basis on which silica and the other oxides are compared with the criteria. */
export type FertilityBasis = 'volatile-free' | 'as given';

/** @internal The suite on both bases, ready to be asked. */
export interface Grounds {
  readonly suite: Suite;
  readonly volatileFree: ConditionReader;
  readonly asGiven: ConditionReader;
  /** SiO2 on the basis asked for (wt %), or undefined when there is none. */
  readonly silica: Column | undefined;
}

/** @internal Puts the suite on the basis of the criteria and works out its totals. */
export function groundsOf(suite: Suite, basis: FertilityBasis): Grounds {
  // A suite that was recast before brings its sums along, and is not recast twice.
  const dry = suite.has('SumAsGiven') ? suite : volatileFree(suite, { iron: 'measured' });
  const totals = totalsOf(suite, dry);
  const asGivenOperand = (symbol: string) => totals.get(symbol) ?? resolveColumn(suite, symbol);
  const dryOperand = (symbol: string) => totals.get(symbol) ?? resolveColumn(dry, symbol);
  const asGiven = new ConditionReader({ suite, operand: asGivenOperand });
  if (basis === 'as given') return { suite, volatileFree: asGiven, asGiven, silica: resolveColumn(suite, 'SiO2') };
  return { suite, volatileFree: new ConditionReader({ suite: dry, operand: dryOperand }), asGiven, silica: resolveColumn(dry, 'SiO2') };
}

/**
 * CheckedTotal: the reported total, or else the sum of oxides plus LOI. OpenSum: the sum of oxides where neither a total nor LOI was
 * reported, so that a low sum may be water.
 */
function totalsOf(suite: Suite, dry: Suite): ReadonlyMap<string, Column> {
  const { size } = suite;
  const sum = dry.column('SumAsGiven').values;
  const total = suite.columns.get('Total');
  const loss = suite.columns.get('LOI');
  const checked = new Float64Array(size).fill(NaN);
  const open = new Float64Array(size).fill(NaN);
  for (let i = 0; i < size; i++) {
    if (total !== undefined && Number.isFinite(total.values[i])) checked[i] = total.values[i];
    else if (loss !== undefined && Number.isFinite(loss.values[i])) checked[i] = sum[i] + loss.values[i];
    // LOI below detection is LOI measured: it adds nothing that a total would show.
    else if (loss !== undefined && loss.states[i] === cellState.belowDetection) checked[i] = sum[i];
    else open[i] = sum[i];
  }
  return new Map([
    ['CheckedTotal', derivedColumn('CheckedTotal', checked, 'wt%')],
    ['OpenSum', derivedColumn('OpenSum', open, 'wt%')],
  ]);
}
