import { formatNumber, showAs, type Showable } from '../display';
import { cellState, cellStateNames, type Step, type Suite } from '../suite';
import { bibliography, formatSource } from '../tables';
import { isVolatileFree, operandsOf } from './axes';
import { sourceText } from './catalogue';
import type { Consensus } from './consensus';
import type { RockNames } from './name-rocks';
import { namingChain } from './naming-chain';
import { schemeNeeds } from './needs';
import { rawAnalysis, sumOxides } from './raw-analysis';
import { rowOf } from './rows';
import { probabilityText, verdictsOf, type SchemeVerdict, type Verdicts } from './verdicts';

/** One step on the way from a cell of the sheet to a verdict. */
export interface ExplanationStep {
  /** `cell`, `recast`, `axis`, `rule`, `verdict` or `reading`. */
  readonly stage: 'cell' | 'recast' | 'axis' | 'rule' | 'verdict' | 'reading';
  readonly what: string;
  readonly value: string;
  readonly detail: string;
  /** Works it rests on, in short. */
  readonly sources: string;
}

/** Every step from the cells of one sample to its verdicts. */
export interface Explanation extends Showable {
  readonly sample: string;
  readonly steps: readonly ExplanationStep[];
  readonly lineage: readonly Step[];
}

/**
 * Why a sample got its verdicts: every step from the cells (value, state, 1σ, file) through recasting and the axes to each verdict, with
 * sources.
 *
 * @param result what `classify`, `nameRocks` or `consensus` gave
 * @param sample name of the sample, or its row number (from 0)
 * @returns the steps, in order; shows as a table
 * @throws RangeError when no row, or more than one, has that name
 * @example explain(classify(suite, ['tas']), 'KE-12')
 */
export function explain(result: Verdicts | RockNames | Consensus, sample: string | number): Explanation {
  if (result === null || typeof result !== 'object' || !('suite' in result))
    throw new TypeError('explain takes what classify, nameRocks or consensus gave, and the name of a sample.');
  const i = rowOf(result.suite, sample, 'explain');
  const isConsensus = 'reading' in result;
  const names = isConsensus ? result.names : 'potassium' in result ? result : undefined;
  const verdicts = isConsensus ? result.verdicts : 'schemes' in result ? result : namesVerdicts(result);
  const asked = [...verdicts.schemes.values()];
  const steps = [
    ...cellSteps(result.suite, asked, i),
    ...recastSteps(result.suite, asked, i),
    ...asked.flatMap((verdict) => [...axisSteps(verdict, i), ...criterionSteps(verdict, i), verdictStep(verdict, i)]),
    ...(names === undefined ? [] : nameSteps(names, i)),
    ...(isConsensus ? readingSteps(result, i) : []),
  ];
  const used = [...new Set(result.lineage.flatMap(({ sources }) => sources))].filter((key) => bibliography().has(key));
  return showAs({ sample: result.suite.samples[i], steps, lineage: result.lineage }, (made) => ({
    title: `${made.sample}: from cell to verdict`,
    columns: ['stage', 'what', 'value', 'detail', 'source'],
    rows: made.steps.map(({ stage, what, value, detail, sources }) => [stage, what, value, detail, sources]),
    notes: used.map(formatSource),
  }));
}

function namesVerdicts(names: RockNames): Verdicts {
  return verdictsOf(names.suite, new Map([names.tas, names.potassium].map((verdict) => [verdict.scheme.key, verdict])), names.lineage);
}

const three = (value: number, digits = 4) => (Number.isFinite(value) ? formatNumber(Number(value.toPrecision(digits))) : 'none');

/** Where the suite was read from, by its lineage. */
function origin({ lineage }: Suite): string {
  const files = lineage.flatMap(({ detail }) => [detail.file, detail.sheet].filter((text) => typeof text === 'string' && text !== ''));
  return files.length === 0 ? '' : files.join(', ');
}

function cellSteps(suite: Suite, asked: readonly SchemeVerdict[], i: number): ExplanationStep[] {
  const raw = rawAnalysis(suite, {});
  const needs = new Set(asked.flatMap(({ scheme }) => [...schemeNeeds(scheme), ...(scheme.basis === 'volatile-free' ? sumOxides : [])]));
  const from = origin(suite);
  return [...raw.columns.values()]
    .filter(({ symbol }) => needs.has(symbol))
    .filter(({ symbol, states }) => states[i] !== cellState.missing || !symbol.startsWith('Fe'))
    .map(({ symbol, unit, values, states, limits, sigma }): ExplanationStep => {
      const known = sigma !== undefined && Number.isFinite(sigma[i]);
      const limit = limits?.[i] ?? NaN;
      const value = Number.isFinite(values[i])
        ? three(values[i], 5)
        : Number.isFinite(limit)
          ? `${states[i] === cellState.belowDetection ? '<' : '>'}${three(limit)}`
          : 'none';
      const turned = isVolatileFree(suite) && sumOxides.includes(symbol) ? ['turned back from the recast value'] : [];
      return {
        stage: 'cell',
        what: symbol,
        value: `${value} ${unit === 'wt%' ? 'wt %' : unit}${known ? ` ± ${three(sigma[i], 2)}` : ''}`.trim(),
        detail: [cellStateNames[states[i]], ...turned, known ? '' : 'no 1σ', from].filter((part) => part !== '').join('; '),
        sources: '',
      };
    });
}

function recastSteps(suite: Suite, asked: readonly SchemeVerdict[], i: number): ExplanationStep[] {
  if (!asked.some(({ scheme }) => scheme.basis === 'volatile-free')) return [];
  const base = operandsOf(suite, 'measured').onBasis('volatile-free');
  const sum = base.values('SumAsGiven')[i];
  return [
    {
      stage: 'recast',
      what: 'to 100 % free of volatiles',
      value: Number.isFinite(sum) ? `× ${three(100 / sum)}` : 'none',
      detail: Number.isFinite(sum) ? `oxides sum to ${three(sum)} wt % as given` : 'a needed oxide is missing',
      sources: sourceText('le_maitre_2002'),
    },
  ];
}

function axisSteps({ scheme, x, y }: SchemeVerdict, i: number): ExplanationStep[] {
  if (scheme.kind === 'criteria') return [];
  const axes = scheme.kind === 'thresholds' ? [[scheme.axes[1], y] as const] : [[scheme.axes[0], x] as const, [scheme.axes[1], y] as const];
  return axes.map(([axis, column]): ExplanationStep => ({
    stage: 'axis',
    what: axis.title,
    value: `${three(column?.values[i] ?? NaN, 5)}${scheme.plane === 'ternary' ? ' %' : axis.unit === '' ? '' : ` ${axis.unit}`}`,
    detail: `${axis.expression}, ${scheme.basis}${scheme.plane === 'ternary' ? ', the three corners closed to 100' : ''}`,
    sources: scheme.sources.map(sourceText).join('; '),
  }));
}

function criterionSteps({ scheme, criteria }: SchemeVerdict, i: number): ExplanationStep[] {
  return criteria.map(({ criterion, met, values }): ExplanationStep => ({
    stage: 'rule',
    what: criterion.text,
    value: met[i] === 1 ? 'met' : met[i] === 0 ? 'not met' : 'not known',
    detail: `${three(values?.[i] ?? NaN)} (${criterion.expression}, ${criterion.basis}${criterion.weight === 'usual' ? '; usual, does not decide' : ''})`,
    sources: scheme.sources.map(sourceText).join('; '),
  }));
}

function verdictStep(verdict: SchemeVerdict, i: number): ExplanationStep {
  const { scheme, field, symbols, names, distance, remarks } = verdict;
  const chance = probabilityText(verdict, i);
  return {
    stage: 'verdict',
    what: scheme.title,
    value: field[i] < 0 ? 'not determined' : scheme.kind === 'criteria' ? names[i] : `${symbols[i]}: ${names[i]}`,
    detail: [Number.isNaN(distance[i]) ? '' : `${three(distance[i], 3)} from the nearest boundary`, chance, remarks[i]]
      .filter((part) => part !== '')
      .join('; '),
    sources: `${scheme.sources.map(sourceText).join('; ')} (${scheme.standing})`,
  };
}

function nameSteps(names: RockNames, i: number): ExplanationStep[] {
  const { steps, name } = namingChain(names, i);
  return [
    ...steps.map(({ text, finding, outcome, source, standing }): ExplanationStep => ({
      stage: 'rule',
      what: text,
      value: outcome,
      detail: finding,
      sources: `${sourceText(source)} (${standing})`,
    })),
    {
      stage: 'verdict',
      what: 'name by the IUGS rules',
      value: name === '' ? 'not named' : name,
      detail: names.remarks[i],
      sources: sourceText('le_maitre_2002'),
    },
  ];
}

function readingSteps({ reading, because, agree, against, notAsked }: Consensus, i: number): ExplanationStep[] {
  const detail = [
    because[i].replace(/\.$/, ''),
    agree[i] === '' ? '' : `agree: ${agree[i]}`,
    against[i] === '' ? '' : `against: ${against[i]}`,
    notAsked[i] === '' ? '' : `not asked: ${notAsked[i]}`,
  ];
  return [{ stage: 'reading', what: 'overall', value: reading[i], detail: detail.filter((part) => part !== '').join('. '), sources: '' }];
}
