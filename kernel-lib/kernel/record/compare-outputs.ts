import type { Notebook } from '../notebook/document';
import { outputData, outputParts, sha256, type OutputData } from './output-data';

/** One value of an output that came out otherwise. */
export interface ValueDifference {
  /** Number of the code cell (from 1), of its output, and the place inside it. */
  readonly cell: number;
  readonly output: number;
  readonly kind: string;
  readonly place: string;
  readonly before: string;
  readonly after: string;
  /** |after − before| / |before| where both are numbers, else undefined. */
  readonly relative?: number;
}

/** How two sets of outputs compare. */
export interface OutputComparison {
  /** Every output's data is the same to the byte. */
  readonly identical: boolean;
  /** What differs by more than the tolerance, in order; at most `mostDifferences` a cell. */
  readonly differences: readonly ValueDifference[];
  /** Values compared. */
  readonly values: number;
}

const mostDifferences = 200;
const isNumber = (text: string): boolean => /^[-+<>]?\s*(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/.test(text.trim());
const numberOf = (text: string): number => Number(text.trim().replace(/^[<>]\s*/, ''));

/**
 * Compares the outputs of two runs of one notebook, value by value.
 *
 * @param tolerance relative difference below which two numbers count as the same (0: to the byte)
 */
export function compareOutputs(before: Notebook, after: Notebook, tolerance: number): OutputComparison {
  const code = (notebook: Notebook) => notebook.cells.filter((cell) => cell.type === 'code' && cell.source.trim() !== '');
  const again = new Map(code(after).map((cell) => [cell.id, cell]));
  const differences: ValueDifference[] = [];
  let identical = true;
  let values = 0;
  code(before).forEach((cell, i) => {
    const [first, second] = [cell.outputs, again.get(cell.id)?.outputs ?? []].map((outputs) => outputs.map(outputData).filter((data) => data !== undefined));
    for (let k = 0; k < Math.max(first.length, second.length); k++) {
      values += first[k] === undefined ? 0 : outputParts(first[k]).length;
      if (first[k] !== undefined && second[k] !== undefined && first[k].kind === second[k].kind && sha256(first[k].content) === sha256(second[k].content)) continue;
      identical = false;
      differences.push(...outputDifferences(first[k], second[k], tolerance).map((difference) => ({ cell: i + 1, output: k + 1, ...difference })));
    }
  });
  return { identical, differences, values };
}

type Difference = Omit<ValueDifference, 'cell' | 'output'>;

function outputDifferences(before: OutputData | undefined, after: OutputData | undefined, tolerance: number): Difference[] {
  if (before === undefined || after === undefined || before.kind !== after.kind) {
    const said = (data: OutputData | undefined) => (data === undefined ? 'nothing' : data.kind === 'error' ? data.content : `a ${data.kind}`);
    return [{ kind: (before ?? after)!.kind, place: 'the whole output', before: said(before), after: said(after) }];
  }
  const [first, second] = [outputParts(before), outputParts(after)];
  const later = new Map(second.map(({ place, text }) => [place, text]));
  const found: Difference[] = [];
  for (const { place, text } of first) {
    if (found.length >= mostDifferences) break;
    const now = later.get(place);
    later.delete(place);
    if (now === text) continue;
    if (now === undefined) {
      found.push({ kind: before.kind, place, before: text, after: 'nothing' });
      continue;
    }
    const relative = isNumber(text) && isNumber(now) ? Math.abs(numberOf(now) - numberOf(text)) / Math.abs(numberOf(text) || 1) : undefined;
    if (relative !== undefined && relative <= tolerance) continue;
    found.push({ kind: before.kind, place, before: text, after: now, ...(relative === undefined ? {} : { relative }) });
  }
  for (const [place, text] of later) if (found.length < mostDifferences) found.push({ kind: before.kind, place, before: 'nothing', after: text });
  return found;
}
