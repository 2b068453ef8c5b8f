import { findAnalyte } from '../chemistry';
import { showAs, type Showable, type TableCell, type TableView } from '../display';
import {
  cellState,
  evaluate,
  ExpressionError,
  expressionSymbols,
  parseExpression,
  resolveColumn,
  step,
  type Column,
  type ExpressionNode,
  type Step,
  type Suite,
} from '../suite';
import { checkCall } from './check-call';
import { quantitiesIn, quantityFormula, type FormulaChoices } from './named-quantities';
import { referenceComposition, usualReferences, type CaesiumLeadChoice, type Reference, type ReferenceComposition } from './reference';
import { shownCell } from './shown-cell';
import { usualRatios } from './usual-ratios';

/** How ratios and named quantities are computed. */
export interface RatioOptions {
  /**
   * What a trailing N divides by (default: `chondrite-c1-1989`; a named quantity such as `Nb/Nb*` takes the reservoir of
   * reference-tables/named-quantities.csv). When given, it is taken for all of them.
   */
  readonly reference?: ReferenceComposition;
  /** Which Cs and Pb of the 1989 primitive mantle to divide by (default `plotting`). */
  readonly caesiumAndLead?: CaesiumLeadChoice;
  /** Formulas other than the default ones, by quantity: `{ 'Eu/Eu*': 'arithmetic' }`. */
  readonly formulas?: FormulaChoices;
  /** Whether 1σ is carried through where the analyses have it (default true). */
  readonly sigma?: boolean;
}

/** Something that was asked for and cannot be had from this suite, and why. */
export interface NotDetermined {
  readonly name: string;
  readonly because: string;
}

/** Ratios and named quantities of every sample, in the order asked for. */
export interface RatioTable extends Showable {
  readonly samples: readonly string[];
  /** By the expression as written: n values with states, limits and 1σ. One that cannot be had is all missing. */
  readonly columns: ReadonlyMap<string, Column>;
  readonly notDetermined: readonly NotDetermined[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/**
 * Any ratio by writing it: ordinary arithmetic over analytes, with wt % and ppm converted before they are divided, 1σ propagated, and
 * below-detection operands giving bounded results (`<3.1`).
 *
 * An expression whose analytes the suite does not hold gives a column of missing cells and an entry in `notDetermined`; an expression that
 * cannot be read, or that names something that is no analyte and no column, is an error.
 *
 * @param suite n samples
 * @param expressions e.g. `['Ba/Th', '(La/Sm)N', '10000*Zr/TiO2', 'Eu/Eu*']` (default: the tracers marked usual in reference-tables/tracers.csv)
 * @param options `reference` for N, `caesiumAndLead`, `formulas` of named quantities, `sigma`
 * @returns a table of columns, each n cells; units as written in the column ('' for pure ratios)
 * @throws ExpressionError naming the piece that cannot be read; RangeError for an unknown reference or formula
 * @source named quantities and references: the tables' own sources, in the lineage
 * @example ratios(suite, ['Ba/Th', '(La/Sm)N']).columns.get('Ba/Th').values
 */
export function ratios(suite: Suite, expressions: readonly string[] = usualRatios(), options: RatioOptions = {}): RatioTable {
  checkCall('ratios', suite, options);
  if (!Array.isArray(expressions) || expressions.some((each) => typeof each !== 'string')) {
    throw new TypeError(`ratios takes a list of expressions such as ['Ba/Th', '(La/Sm)N'], not ${JSON.stringify(expressions)}.`);
  }
  const columns = new Map<string, Column>();
  const notDetermined: NotDetermined[] = [];
  const record = new Bookkeeping(options);
  for (const expression of expressions) {
    const lacking = whatIsLacking(suite, expression, record);
    if (lacking !== undefined) notDetermined.push({ name: expression, because: lacking });
    columns.set(expression, lacking === undefined ? compute(suite, expression, record) : blankColumn(expression, suite.size));
  }
  const notes = [...record.notes(), ...notDetermined.map(({ name, because }) => `${name} not determined: ${because}.`)];
  const lineage = [...suite.lineage, record.step('ratios', { expressions, notDetermined: notDetermined.map(({ name }) => name) })];
  return showAs({ samples: suite.samples, columns, notDetermined, notes, lineage }, ratioView);
}

/**
 * One ratio or named quantity of every sample, as a column.
 *
 * @param suite n samples
 * @param expression e.g. `(La/Sm)N`, `Eu/Eu*`
 * @throws ExpressionError when it cannot be read, or the suite lacks what it needs
 * @example ratio(suite, 'Eu/Eu*', { formulas: { 'Eu/Eu*': 'arithmetic' } }).values
 */
export function ratio(suite: Suite, expression: string, options: RatioOptions = {}): Column {
  checkCall('ratio', suite, options);
  const record = new Bookkeeping(options);
  const lacking = whatIsLacking(suite, expression, record);
  if (lacking !== undefined) throw new ExpressionError(`"${expression}" ${lacking}. The suite holds: ${suite.analytes.join(', ')}.`);
  return compute(suite, expression, record);
}

/**
 * The suite with ratios added as columns, under the expression as their symbol, so that they can be filtered, grouped and drawn.
 *
 * @example withRatios(suite, ['Ba/Th']).where({ 'Ba/Th': { from: 300 } })
 */
export function withRatios(suite: Suite, expressions: readonly string[] = usualRatios(), options: RatioOptions = {}): Suite {
  const table = ratios(suite, expressions, options);
  return suite.with(table.columns.values(), table.lineage[table.lineage.length - 1]);
}

/** What one call used: options made whole, the references and formulas touched. */
class Bookkeeping {
  readonly chosen: RatioOptions;
  private readonly references = new Map<string, Reference>();
  private readonly formulas = new Map<string, { variant: string; formula: string; source: string }>();
  /** Analytes divided by each reference. */
  private readonly divided = new Map<Reference, Set<string>>();

  constructor(options: RatioOptions) {
    this.chosen = options;
    for (const [quantity, variant] of Object.entries(options.formulas ?? {})) quantityFormula(quantity, variant);
  }

  reference(usual: string): Reference {
    const { reference = usual, caesiumAndLead } = this.chosen;
    const key = typeof reference === 'string' ? reference : '';
    let found = this.references.get(key);
    if (found === undefined) this.references.set(key, (found = referenceComposition(reference, { caesiumAndLead })));
    return found;
  }

  /** The reference as evaluation wants it, noting what is asked of it. */
  valueIn(reference: Reference): (symbol: string) => number {
    let asked = this.divided.get(reference);
    if (asked === undefined) this.divided.set(reference, (asked = new Set()));
    return (symbol) => {
      asked.add(symbol);
      return reference.valueOf(symbol) ?? NaN;
    };
  }

  formula(quantity: string): { formula: string; reference: Reference } {
    const { variant, formula, source, reference } = quantityFormula(quantity, this.chosen.formulas?.[quantity]);
    this.formulas.set(quantity, { variant, formula, source });
    return { formula, reference: this.reference(reference) };
  }

  notes(): string[] {
    const used = [...this.references.values()];
    return [
      ...used.map(({ name, standings }) => `N: divided by ${name}${standings.length > 0 ? ` (values ${standings.join(', ')})` : ''}.`),
      ...[...this.formulas].map(([quantity, { formula, variant }]) => `${quantity} = ${formula} (${variant}).`),
    ];
  }

  step(what: string, detail: Step['detail']): Step {
    const used = [...this.references.values()];
    return step(
      what,
      {
        ...detail,
        references: used.map(({ key }) => key),
        referenceStandings: [...new Set(used.flatMap(({ standings }) => standings))],
        caesiumAndLead: this.chosen.caesiumAndLead ?? 'plotting',
        formulas: Object.fromEntries([...this.formulas].map(([quantity, { variant, formula }]) => [quantity, `${variant}: ${formula}`])),
      },
      {
        sources: [...new Set([...used.flatMap(({ sources }) => sources), ...[...this.formulas.values()].map(({ source }) => source)])],
        tables: [
          ...new Set([...used.flatMap(({ tables }) => tables), ...(this.formulas.size > 0 ? ['named-quantities.csv'] : []), 'atomic-weights.csv']),
        ],
        fromMemory: [...this.divided].flatMap(([reference, symbols]) => reference.fromMemory(symbols)),
        says: used.length === 0 ? '' : `Ratios marked N are normalised to ${used.map(({ name }) => name).join(' and ')}.`,
      },
    );
  }
}

const bracketed = (expression: string): string => quantitiesIn(expression).reduce((text, name) => text.replaceAll(name, `[${name}]`), expression);

/** Why an expression cannot be computed from this suite, or undefined when it can. */
function whatIsLacking(suite: Suite, expression: string, record: Bookkeeping): string | undefined {
  const mentioned = quantitiesIn(expression);
  const parts: { text: string; usual: string }[] = [{ text: bracketed(expression), usual: usualReferences.rareEarths }];
  for (const name of mentioned) {
    const { formula, reference } = quantityFormula(name, record.chosen.formulas?.[name]);
    parts.push({ text: formula, usual: reference });
  }
  const lacking = new Set<string>();
  const notInReference = new Set<string>();
  for (const { text, usual } of parts) {
    const tree = parseExpression(text);
    for (const symbol of expressionSymbols(tree)) {
      if (mentioned.includes(symbol) || resolveColumn(suite, symbol) !== undefined) continue;
      if (findAnalyte(symbol) === undefined) {
        throw new ExpressionError(
          `"${expression}": "${symbol}" is neither an analyte nor a column of this suite. Its columns: ${suite.analytes.join(', ')}.`,
        );
      }
      lacking.add(symbol);
    }
    for (const symbol of normalisedSymbols(tree)) if (record.reference(usual).valueOf(symbol) === undefined) notInReference.add(symbol);
  }
  if (lacking.size > 0) return `needs ${[...lacking].join(', ')}, which this suite does not hold`;
  return notInReference.size > 0 ? `needs a reference value of ${[...notInReference].join(', ')}` : undefined;
}

function normalisedSymbols(node: ExpressionNode): string[] {
  switch (node.kind) {
    case 'number':
      return [];
    case 'column':
      return node.normalised ? [node.symbol] : [];
    case 'negate':
      return normalisedSymbols(node.of);
    case 'binary':
      return [...normalisedSymbols(node.left), ...normalisedSymbols(node.right)];
    case 'call':
      return node.arguments.flatMap(normalisedSymbols);
  }
}

function compute(suite: Suite, expression: string, record: Bookkeeping): Column {
  const { sigma } = record.chosen;
  const mentioned = quantitiesIn(expression);
  const named = new Map<string, Column>();
  for (const name of mentioned) {
    const { formula, reference } = record.formula(name);
    named.set(name, evaluate(suite, formula, { symbol: name, sigma, reference: record.valueIn(reference) }));
  }
  if (mentioned.length === 1 && mentioned[0] === expression.trim()) return { ...named.get(mentioned[0])!, symbol: expression };
  const text = bracketed(expression);
  const usesN = normalisedSymbols(parseExpression(text)).length > 0;
  return evaluate(suite, text, {
    symbol: expression,
    sigma,
    ...(usesN ? { reference: record.valueIn(record.reference(usualReferences.rareEarths)) } : {}),
    operand: (symbol) => named.get(symbol) ?? resolveColumn(suite, symbol),
  });
}

function blankColumn(symbol: string, size: number): Column {
  return { symbol, kind: 'quantity', unit: '', values: new Float64Array(size).fill(NaN), states: new Uint8Array(size).fill(cellState.missing) };
}

function ratioView(table: Omit<RatioTable, 'toMimeBundle'>): TableView {
  const columns = [...table.columns.values()];
  const shown = Math.min(table.samples.length, 60);
  const rows = Array.from({ length: shown }, (_, i): TableCell[] => [
    table.samples[i],
    ...columns.map((entry) => shownCell(entry.values, entry.states, entry.limits, i)),
  ]);
  return {
    title: `Ratios of ${table.samples.length} samples`,
    columns: ['sample', ...columns.map(({ symbol }) => symbol)],
    rows,
    totalRows: table.samples.length,
    notes: table.notes,
  };
}
