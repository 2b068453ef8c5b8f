import { stripVTControlCharacters } from 'node:util';
import { outputText, type Notebook } from '../notebook/document';
import { summaryType } from '../run-summary';
import { blocksOfBundle, tableBlock, type Block } from './blocks';

/** A notebook for readers who have none: its texts, figures and tables in order, without code. */
export function notebookBlocks(notebook: Notebook): { readonly title: string; readonly blocks: readonly Block[] } {
  let title = '';
  const blocks: Block[] = [];
  const summary: Block[] = [];
  for (const cell of notebook.cells) {
    if (cell.type === 'markdown') {
      for (const part of markdownParts(cell.source)) {
        if (part.kind === 'heading' && part.level === 1 && title === '') title = part.text;
        else if (part.kind === 'heading') blocks.push({ kind: 'heading', level: part.level <= 2 ? 2 : 3, text: part.text });
        else if (part.text.trim() !== '') blocks.push({ kind: 'text', markdown: part.text });
      }
    }
    for (const output of cell.outputs) {
      if (output.output_type === 'stream') {
        const text = stripVTControlCharacters(outputText(output.text) ?? '').trim();
        if (text !== '' && output.name !== 'stderr') blocks.push({ kind: 'printed', text });
      } else if (output.output_type === 'error') {
        blocks.push({ kind: 'printed', text: `This step failed: ${String(output.ename)}: ${String(output.evalue)}` });
      } else {
        const data = (output.data ?? {}) as Record<string, unknown>;
        const lines = (data[summaryType] as { lines: [string, string | number][] } | undefined)?.lines;
        if (lines === undefined) blocks.push(...blocksOfBundle(data));
        else summary.push(tableBlock('', ['what', 'value'], lines));
      }
    }
  }
  const first: Block[] = summary.length === 0 ? [] : [{ kind: 'heading', level: 2, text: 'Summary' }, ...summary];
  return { title: title || 'Report', blocks: [...first, ...blocks] };
}

type Part = { readonly kind: 'heading'; readonly level: number; readonly text: string } | { readonly kind: 'text'; readonly text: string };

/** Headings of a Markdown text and the texts between them; lines inside a code fence are no headings. */
function markdownParts(source: string): Part[] {
  const parts: Part[] = [];
  let text: string[] = [];
  let fenced = false;
  for (const line of source.split('\n')) {
    if (/^\s*(```|~~~)/.test(line)) fenced = !fenced;
    const heading = fenced ? null : /^(#{1,6})\s+(.+?)\s*#*$/.exec(line);
    if (heading === null) text.push(line);
    else {
      parts.push({ kind: 'text', text: text.join('\n') }, { kind: 'heading', level: heading[1].length, text: heading[2].replace(/[*_`]/g, '') });
      text = [];
    }
  }
  return [...parts, { kind: 'text', text: text.join('\n') }];
}
