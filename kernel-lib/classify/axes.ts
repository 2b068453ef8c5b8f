import { volatileFree, totalIron, withMagnesiumNumber, type IronBasis } from '../recast';
import {
  cellState,
  evaluate,
  ExpressionError,
  expressionSymbols,
  parseExpression,
  resolveColumn,
  scaleColumn,
  type Column,
  type Suite,
} from '../suite';
import { cationsPerFormula, massFactor, molarMass } from '../tables';
import type { SchemeBasis } from './scheme';

/** How total iron enters the volatile-free sum; the IUGS rule keeps measured FeO and Fe2O3. */
export type { IronBasis };

/** The operands of schemes, on whichever basis they ask for; each is made once. */
export interface Operands {
  readonly suite: Suite;
  readonly iron: IronBasis;
  readonly operand: (basis: SchemeBasis, symbol: string) => Column | undefined;
  readonly onBasis: (basis: SchemeBasis) => Suite;
}

/** A suite that was recast before is on the volatile-free basis already: recasting it again would hide the analysis behind it. */
export function isVolatileFree(suite: Suite): boolean {
  return suite.has('SumAsGiven');
}

export function operandsOf(suite: Suite, iron: IronBasis): Operands {
  let made = operandsBySuite.get(suite);
  if (made === undefined) operandsBySuite.set(suite, (made = new Map()));
  let operands = made.get(iron);
  if (operands === undefined) made.set(iron, (operands = makeOperands(suite, iron)));
  return operands;
}

/** Suites are immutable, so what was recast for one question serves the next; it goes when the suite goes. */
const operandsBySuite = new WeakMap<Suite, Map<IronBasis, Operands>>();

function makeOperands(suite: Suite, iron: IronBasis): Operands {
  const known = new Map<string, Column | undefined>();
  let recast: Suite | undefined;
  const onBasis = (basis: SchemeBasis) =>
    basis === 'as-analysed' ? suite : (recast ??= isVolatileFree(suite) ? suite : volatileFree(suite, { iron }));
  const operand = (basis: SchemeBasis, symbol: string): Column | undefined => {
    const key = `${basis} ${symbol}`;
    if (!known.has(key))
      known.set(
        key,
        find(onBasis(basis), symbol, (other) => operand(basis, other)),
      );
    return known.get(key);
  };
  return { suite, iron, operand, onBasis };
}

function find(base: Suite, symbol: string, other: (symbol: string) => Column | undefined): Column | undefined {
  const proportion = /^(mol|cation) (\S+)$/.exec(symbol);
  if (proportion !== null) {
    const of = other(proportion[2]);
    const factor = (proportion[1] === 'mol' ? 1 : cationsPerFormula(proportion[2])) / molarMass(proportion[2]);
    return of === undefined ? undefined : scaleColumn(of, factor, { symbol, kind: 'quantity', unit: '' });
  }
  if (symbol === 'FeOT' || symbol === 'Fe2O3T') {
    const { column, counts } = totalIron(base);
    if (counts.none === base.size && !column.states.includes(cellState.belowDetection)) return undefined;
    return symbol === 'FeOT' ? column : scaleColumn(column, massFactor('FeO', 'Fe2O3'), { symbol, kind: 'oxide', unit: 'wt%' });
  }
  if (symbol === 'Mg-number')
    return other('MgO') === undefined || other('FeOT') === undefined ? undefined : withMagnesiumNumber(base).column('Mg-number');
  return resolveColumn(base, symbol);
}

/** An axis on its basis: its column, or what the suite lacks for it. */
export interface AxisValues {
  readonly column?: Column;
  readonly lacking: readonly string[];
  /** Symbols it reads. */
  readonly symbols: readonly string[];
}

/** Evaluates an expression on a basis; 1σ only where asked. */
export function axisValues(operands: Operands, expression: string, basis: SchemeBasis, sigma = false): AxisValues {
  const symbols = expressionSymbols(parseExpression(expression));
  const lacking = symbols.filter((symbol) => operands.operand(basis, symbol) === undefined);
  if (lacking.length > 0) return { lacking: lacking.map(plainSymbol), symbols };
  try {
    return { column: evaluate(operands.suite, expression, { sigma, operand: (symbol) => operands.operand(basis, symbol) }), lacking, symbols };
  } catch (error) {
    if (error instanceof ExpressionError) throw new ExpressionError(`Scheme axis: ${error.message}`);
    throw error;
  }
}

function plainSymbol(symbol: string): string {
  return symbol.replace(/^(mol|cation) /, '');
}

/** The oxides that a volatile-free sum cannot do without. */
const neededForSum = ['SiO2', 'Al2O3', 'FeOT', 'MgO', 'CaO', 'Na2O', 'K2O'];

/** Why a row has no value on some axes, in words: `needs K2O`, `Nb below detection`. Made for failing rows only. */
export function whyMissing(operands: Operands, axes: readonly AxisValues[], basis: SchemeBasis, row: number): string {
  const whole = [...new Set(axes.flatMap((axis) => axis.lacking))];
  if (whole.length > 0) return `needs ${whole.join(', ')}`;
  const symbols = [...new Set(axes.flatMap((axis) => axis.symbols))];
  const lacking: string[] = [];
  const below: string[] = [];
  const above: string[] = [];
  const look = (symbol: string) => {
    const name = plainSymbol(symbol);
    const column = symbol === 'Mg-number' ? undefined : operands.operand('as-analysed', name);
    const state = column?.states[row] ?? cellState.missing;
    const list =
      state === cellState.missing ? lacking : state === cellState.belowDetection ? below : state === cellState.aboveRange ? above : undefined;
    if (list !== undefined && !list.includes(name)) list.push(name);
  };
  symbols.filter((symbol) => symbol !== 'Mg-number').forEach(look);
  if (symbols.includes('Mg-number')) ['MgO', 'FeOT'].forEach(look);
  if (basis === 'volatile-free' && lacking.length + below.length + above.length === 0) neededForSum.forEach(look);
  const parts = [
    lacking.length === 0 ? '' : `needs ${lacking.join(', ')}`,
    below.length === 0 ? '' : `${below.join(', ')} below detection`,
    above.length === 0 ? '' : `${above.join(', ')} above range`,
  ].filter((part) => part !== '');
  return parts.length === 0 ? `no finite value of ${symbols.map(plainSymbol).join(', ')}` : parts.join('; ');
}
