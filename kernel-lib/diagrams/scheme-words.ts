import type { Scheme, SchemeVerdict } from '../classify';
import type { IronBasis } from '../recast';
import { step, type Step, type Suite } from '../suite';
import { bibliography, shortSource } from '../tables';
import { bracketed, drawable, dressText } from './chemical-text';

/** What a scheme diagram says: titles of axes, caption, reasons, verdicts, lineage. */

/** A source in short, or as an own scheme writes it. */
function cite(key: string): string {
  return bibliography().has(key) ? shortSource(key) : key;
}

/** Titles of the axes (of the corners of a triangle), with unit and basis. */
export function schemeTitles({ axes, basis }: Scheme): readonly string[] {
  return axes.map(({ title, unit }) => drawable(bracketed(title, unit, basis === 'volatile-free' && unit === 'wt %' ? 'volatile-free' : '')));
}

/** Why a sample has no place: of schemes that divide a plane, the verdict says it; others speak of their criteria instead. */
export function reasonOf({ kind, basis }: Scheme, remark: string): string | undefined {
  if (kind === 'criteria' || kind === 'points') return basis === 'volatile-free' ? 'without a volatile-free sum' : undefined;
  const reason = dressText(remark).replace(/^needs /, 'without ').replace(/; needs /g, ', ');
  return reason === '' ? undefined : reason;
}

/** What the axes need and the suite lacks, for an error. */
export function missingAxes(suite: Suite, { axes }: Scheme, { remarks }: SchemeVerdict): string {
  const needed = axes.map(({ title }) => title).join(', ');
  return dressText(`${needed} (${remarks[0] ?? 'missing'}; the suite holds ${suite.analytes.join(', ') || 'no column'})`);
}

/** The verdict on each sample as hovering shows it. */
export function verdictTexts({ names, remarks }: SchemeVerdict): string[] {
  return names.map((name, i) => {
    const remark = dressText(remarks[i]);
    if (name === '') return `not determined: ${remark}`;
    return remark === '' ? name : `${name} (${remark})`;
  });
}

const whatIsDrawn = { polygons: 'Boundaries', lines: 'Boundaries', thresholds: 'Boundaries', criteria: 'Criteria', points: 'Reference points' } as const;
const ironTexts = { measured: 'as measured', 'total-as-FeO': 'as FeO*', 'total-as-Fe2O3': 'as Fe₂O₃*' } as const;

/** Sentences of the caption: sources, basis, what dashes mean. */
export function schemeCaption(chosen: Scheme, others: readonly Scheme[], suite: Suite, iron: IronBasis = 'measured'): string[] {
  const { kind, axes, basis, plane, lines } = chosen;
  const sentences = [`${whatIsDrawn[kind]}: ${sourcesOf(chosen, others).map(cite).join('; ')}.`];
  if (basis === 'volatile-free') {
    // A suite that came recast says in its own lineage how its iron was taken.
    sentences.push(`Recast to 100 % free of volatiles${suite.has('SumAsGiven') ? '' : `, iron ${ironTexts[iron]}`}.`);
    if (axes.some(({ expression }) => /FeOT|Fe2O3T/.test(expression))) sentences.push('FeO*: total iron as FeO.');
  }
  if (plane === 'ternary') {
    const units = [...new Set(axes.map(({ unit }) => unit))].filter((unit) => unit !== '');
    sentences.push(`Triangle: ${units.length === 1 ? units[0] : schemeTitles(chosen).join('; ')}, closed to 100 %.`);
  }
  if (kind === 'lines' && lines.some(({ published }) => !published)) sentences.push('Dashed: continued straight beyond the published ends.');
  return sentences;
}

/** The step of drawing, with the sources and the recalled boundaries behind it. */
export function schemeStep(who: string, chosen: Scheme, others: readonly Scheme[]): Step {
  const all = [chosen, ...others];
  const recalled = all.filter(({ standing }) => standing === 'from memory');
  return step(
    `diagrams.${who}`,
    { scheme: chosen.key, also: others.map(({ key }) => key) },
    {
      sources: sourcesOf(chosen, others).filter((key) => bibliography().has(key)),
      tables: all.filter(({ origin }) => origin === 'built in').map(({ key }) => `schemes/${key}.json`),
      fromMemory: recalled.map(({ title, sources }) => `boundaries of ${title} (${sources.map(cite).join('; ')})`),
    },
  );
}

function sourcesOf(chosen: Scheme, others: readonly Scheme[]): string[] {
  return [...new Set([chosen, ...others].flatMap(({ sources }) => sources))];
}
