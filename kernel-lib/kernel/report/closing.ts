import { lineage, sources, type Step } from '../../suite';
import type { RunFacts } from '../record/run-facts';
import { tableBlock, type Block } from './blocks';

/** What holds for every result of this library, printed in every report. */
export const generalCautions: readonly string[] = [
  'This is a screening and interpretation aid for trained users; it does not replace the judgement of one.',
  'Results that lead to drilling, public disclosure or decisions on land use need a qualified (competent) person under the reporting code that applies, and the local rules for land, safety and environment.',
  'Nothing here forecasts earthquakes or eruptions.',
  'Names and series hold for fresh volcanic rocks within the limits of each scheme; altered samples are flagged, not corrected.',
];

const list = (items: readonly string[]): Block => ({ kind: 'text', markdown: items.map((item) => `- ${item}`).join('\n') });
const heading = (text: string): Block => ({ kind: 'heading', level: 2, text });

/** The last parts of a report: cautions, methods, sources, values to be checked, lineage, and what ran. */
export function closingBlocks(steps: readonly Step[], own: { readonly cautions?: readonly string[]; readonly facts?: RunFacts } = {}): Block[] {
  const blocks: Block[] = [heading('Cautions'), list([...generalCautions, ...(own.cautions ?? [])])];
  if (steps.length > 0) {
    const traced = { lineage: steps };
    const found = sources(traced);
    blocks.push(heading('Methods'), { kind: 'text', markdown: escapeMarks(found.methods) });
    if (found.references.length > 0) blocks.push(heading('Sources'), list(found.references.map(escapeMarks)));
    if (found.fromMemory.length > 0) {
      blocks.push(heading('To be checked'), { kind: 'text', markdown: 'These published values were recalled and have not been seen in their source; check them before relying on the results.' }, list(found.fromMemory.map(escapeMarks)));
    }
    const { steps: all } = lineage(traced);
    const rows = all.map((each, i) => [i + 1, each.what, Object.entries(each.detail).map(([name, value]) => `${name}: ${plainDetail(value)}`).join('; ')]);
    blocks.push(heading('Lineage'), tableBlock('Every step, in order', ['step', 'what', 'with'], rows));
  }
  if (own.facts !== undefined) blocks.push(heading('Record'), ...recordBlocks(own.facts));
  return blocks;
}

function plainDetail(value: unknown): string {
  if (Array.isArray(value)) return value.length > 12 ? `${value.slice(0, 12).map(plainDetail).join(', ')} … (${value.length})` : value.map(plainDetail).join(', ');
  if (typeof value === 'object' && value !== null) return Object.entries(value).map(([name, part]) => `${name} ${plainDetail(part)}`).join(', ');
  return String(value);
}

function recordBlocks({ inputs, tables, versions }: RunFacts): Block[] {
  return [
    tableBlock('Inputs', ['file', 'bytes', 'SHA-256'], inputs.map(({ name, bytes, sha256 }) => [name, bytes, sha256])),
    tableBlock('Reference tables read', ['table', 'SHA-256'], Object.entries(tables).map(([table, hash]) => [table, hash.slice(0, 16)]), ['The first 16 digits of each hash.']),
    tableBlock('What ran', ['software', 'version'], [['wedgework', versions.wedgework], ['Node.js', versions.node], ['platform', versions.platform], ...Object.entries(versions.packages)]),
  ];
}

/** Text that is to be shown as it is, in Markdown. */
export const escapeMarks = (text: string): string => text.replace(/[\\`*_[\]<>#|~]/g, '\\$&');
