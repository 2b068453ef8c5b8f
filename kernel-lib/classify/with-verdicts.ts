import { derivedColumn, step, suiteOf, type Column, type Suite } from '../suite';
import type { Consensus } from './consensus';
import type { RockNames } from './name-rocks';
import type { SchemeVerdict, Verdicts } from './verdicts';

/**
 * The suite with what a classification found written into it: to group, to draw, to put in a frame or in a file.
 *
 * For every scheme that was asked: the labels `key` (symbol) and `key name`, the columns `key distance` and, where 1σ is known,
 * `key probability` (of the field named, 0 to 1). For names: the label `rock`. For a consensus: also `reading`.
 *
 * @param result what `classify`, `nameRocks` or `consensus` gave
 * @returns the suite that was asked, with these labels ('' where there is none) and columns (NaN where there is none)
 * @throws TypeError for anything else
 * @example withVerdicts(nameRocks(suite)).groupBy('rock')
 */
export function withVerdicts(result: Verdicts | RockNames | Consensus): Suite {
  if (result === null || typeof result !== 'object' || !('suite' in result))
    throw new TypeError('withVerdicts takes what classify, nameRocks or consensus gave.');
  const labels: Record<string, readonly string[]> = {};
  const columns: Column[] = [];
  const names = 'reading' in result ? result.names : 'potassium' in result ? result : undefined;
  const verdicts: readonly SchemeVerdict[] =
    'reading' in result ? [...result.verdicts.schemes.values()] : 'schemes' in result ? [...result.schemes.values()] : [result.tas, result.potassium];
  for (const { scheme, symbols, names: fieldNames, distance, probability, field } of verdicts) {
    labels[scheme.key] = symbols;
    labels[`${scheme.key} name`] = fieldNames;
    columns.push(derivedColumn(`${scheme.key} distance`, distance.slice(), ''));
    if (probability === undefined) continue;
    const share = Float64Array.from(field, (k, i) => (k < 0 ? NaN : probability.values[k][i]));
    columns.push(derivedColumn(`${scheme.key} probability`, share, ''));
  }
  if (names !== undefined) labels.rock = names.names;
  if ('reading' in result) labels.reading = result.reading;
  const because = step('withVerdicts', { schemes: verdicts.map(({ scheme }) => scheme.key), labels: Object.keys(labels) });
  const { suite } = result;
  const all = new Map(suite.columns);
  for (const each of columns) all.set(each.symbol, each);
  return suiteOf({ columns: all.values(), labels: new Map([...suite.labels, ...Object.entries(labels)]), lineage: [...result.lineage, because] });
}
