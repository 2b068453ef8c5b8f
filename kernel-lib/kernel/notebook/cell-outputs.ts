import type { CellOutput } from '../output';
import { progressType } from '../progress';
import type { NotebookOutput } from './document';

interface Entry {
  output: NotebookOutput;
  readonly displayId?: string;
  /** A progress line: worth seeing while it lasts, and different in every run, so it does not go into the file. */
  readonly passing: boolean;
}

/** Gathers the outputs of all cells of a run as a notebook file keeps them: joined streams, displays updated in place. */
export class OutputStore {
  private readonly cells = new Map<string, Entry[]>();

  add(cellId: string, output: CellOutput, executionCount: number): void {
    const entries = this.cells.get(cellId) ?? [];
    this.cells.set(cellId, entries);
    if (output.kind === 'update') {
      for (const list of this.cells.values()) {
        for (const entry of list) {
          if (output.displayId !== undefined && entry.displayId === output.displayId) entry.output = { ...entry.output, data: output.data, metadata: output.metadata };
        }
      }
      return;
    }
    if (output.kind === 'stream') {
      const { name, text } = output;
      const last = entries.filter(({ passing }) => !passing).at(-1);
      if (last?.output.output_type === 'stream' && last.output.name === name) last.output = { ...last.output, text: String(last.output.text) + text };
      else entries.push({ output: { name, output_type: 'stream', text }, passing: false });
      return;
    }
    if (output.kind === 'error') {
      const { ename, evalue, traceback } = output;
      entries.push({ output: { ename, evalue, output_type: 'error', traceback }, passing: false });
      return;
    }
    const { data, metadata, displayId } = output;
    const shown = { data, metadata, output_type: output.kind === 'result' ? 'execute_result' : 'display_data' };
    entries.push({ output: output.kind === 'result' ? { ...shown, execution_count: executionCount } : shown, displayId, passing: progressType in data });
  }

  outputs(cellId: string): readonly NotebookOutput[] {
    return (this.cells.get(cellId) ?? []).filter(({ passing }) => !passing).map(({ output }) => output);
  }
}
