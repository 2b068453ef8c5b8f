import { formatNumber, showAs, type Showable } from '../display';
import { namingRules, type NamingRule } from './naming-rules';
import { operandsOf } from './axes';
import { agpaitic, namingValues, quartzShare, type RockNames } from './name-rocks';
import { rowOf } from './rows';

/** One rule on the way to a name. */
export interface NamingStep {
  readonly rule: string;
  /** What the rule says. */
  readonly text: string;
  /** The numbers it was asked with. */
  readonly finding: string;
  /** What followed. */
  readonly outcome: string;
  readonly source: string;
  readonly standing: string;
}

/** The rules that led to one sample's name, in order. */
export interface NamingChain extends Showable {
  readonly sample: string;
  readonly name: string;
  readonly steps: readonly NamingStep[];
}

/**
 * The rules that led to the name of one sample, in the order in which they were asked, each with its numbers.
 *
 * @param names the result of `nameRocks`
 * @param sample name of the sample, or its row number (from 0)
 * @throws RangeError when no row, or more than one, has that name
 * @example namingChain(nameRocks(suite), 'KE-12')
 */
export function namingChain(names: RockNames, sample: string | number): NamingChain {
  const i = rowOf(names.suite, sample, 'namingChain');
  const rules = namingRules();
  const steps: NamingStep[] = [];
  const { suite, tas, potassium, norm } = names;
  const operands = operandsOf(suite, 'measured');
  const on = (symbol: string) => operands.operand('volatile-free', symbol)?.values[i] ?? NaN;
  const raw = (symbol: string) => suite.columns.get(symbol)?.values[i] ?? NaN;
  const said = (entries: Readonly<Record<string, number>>) =>
    Object.entries(entries)
      .map(([name, value]) => `${name} ${Number.isFinite(value) ? formatNumber(Number(value.toPrecision(4))) : 'not known'}`)
      .join(', ');
  const add = (rule: NamingRule, finding: string, outcome: string) => {
    const { text, source, standing } = rules[rule];
    steps.push({ rule, text, finding, outcome, source, standing });
  };
  const screen = names.volatileScreen[i];
  add('volatiles', said({ 'H2O+': raw('H2O+'), CO2: raw('CO2') }), screen === 0 ? 'passed' : screen === 1 ? 'failed' : 'could not be asked');
  const majors = { SiO2: on('SiO2'), MgO: on('MgO'), TiO2: on('TiO2'), 'Na2O + K2O': on('Na2O') + on('K2O') };
  const high = names.highMagnesium[i];
  for (const [rule, meets, outcome] of [
    ['boninite', high === 1, 'boninite'],
    ['komatiite', high === 2 || high === 3, names.roots[i]],
    ['picrite', high === 4, 'picrite'],
  ] as const) {
    add(rule, said(majors), meets ? outcome : 'not met');
    if (meets) break;
  }
  if (high === 0) {
    steps.push({
      rule: 'TAS',
      text: 'field of total alkalis and silica, volatile-free',
      finding: said({ SiO2: tas.x?.values[i] ?? NaN, 'Na2O + K2O': tas.y?.values[i] ?? NaN }),
      outcome:
        tas.field[i] < 0
          ? `no field: ${tas.remarks[i]}`
          : `${tas.symbols[i]} ${tas.names[i]}, ${formatNumber(Number(tas.distance[i].toPrecision(3)))} from the nearest boundary`,
      source: 'le_bas_1986',
      standing: tas.scheme.standing,
    });
    const weight = (mineral: 'Q' | 'Ne' | 'Ol' | 'Ab') => norm.weights[mineral].values[names.normRow[i]];
    const values = namingValues(operands, norm, names.normRow);
    const symbol = tas.symbols[i];
    if (symbol === 'S1' || symbol === 'S2' || symbol === 'S3') add('sodic', said({ Na2O: on('Na2O'), K2O: on('K2O') }), names.roots[i]);
    if (symbol === 'B') add('basalt', said({ 'normative Ne': weight('Ne') }), names.roots[i]);
    if (symbol === 'U1' || symbol === 'F') {
      add(
        'nephelinite',
        said({ 'normative Ne': weight('Ne'), 'normative Ab': weight('Ab') }),
        /nephelinite/.test(names.roots[i]) ? names.roots[i] : 'not met',
      );
      if (symbol === 'U1' && !/nephelinite/.test(names.roots[i])) add('basanite', said({ 'normative Ol': weight('Ol') }), names.roots[i]);
    }
    if (symbol === 'T')
      add('trachyte', said({ q: quartzShare(values, i) }), quartzShare(values, i) > rules.trachyte.quartzAbove ? 'trachydacite' : 'trachyte');
    if (symbol === 'T' || symbol === 'R') {
      const ratio = agpaitic(values, i);
      add(
        'peralkaline',
        said({ '(Na2O + K2O)/Al2O3': ratio, Al2O3: on('Al2O3'), 'FeO*': on('FeOT') }),
        ratio > rules.peralkaline.above ? names.roots[i] : 'not peralkaline',
      );
    }
    if (names.names[i] !== names.roots[i])
      add(
        'potassium',
        said({ K2O: on('K2O'), SiO2: on('SiO2') }),
        potassium.names[i] + (potassium.remarks[i] === '' ? '' : ` (${potassium.remarks[i]})`),
      );
  }
  return showAs({ sample: suite.samples[i], name: names.names[i], steps }, (chain) => ({
    title: `${chain.sample}: ${chain.name === '' ? 'not named' : chain.name}`,
    columns: ['rule', 'what it says', 'numbers', 'outcome', 'source', 'standing'],
    rows: chain.steps.map(({ rule, text, finding, outcome, source, standing }) => [rule, text, finding, outcome, source, standing]),
    notes: names.remarks[i] === '' ? [] : [names.remarks[i]],
  }));
}
