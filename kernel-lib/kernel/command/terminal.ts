import { stripVTControlCharacters } from 'node:util';
import type { NotebookRun, RunEvent } from '../notebook/run';

/** Tells a run's progress on the terminal: one line that changes in place, or a line a part where the output is no terminal. */
export class TerminalProgress {
  private heading = '';
  private open = false;

  constructor(
    private readonly stream: NodeJS.WriteStream,
    private readonly quiet: boolean,
  ) {}

  readonly tell = (event: RunEvent): void => {
    if (event.kind === 'stream') {
      // What cells print belongs to the notebook; only warnings are worth the terminal.
      if (event.name === 'stderr' && !this.quiet) this.line(event.text.trimEnd());
      return;
    }
    if (this.quiet) return;
    if (event.kind === 'task') {
      if (this.stream.isTTY) this.inPlace(`    ${event.text}`);
      else if (event.done) this.line(`    ${event.text}`);
      return;
    }
    const place = `${String(event.cell).padStart(String(event.of).length)}/${event.of}`;
    if (this.stream.isTTY) this.inPlace(`  cell ${place}  ${event.heading}`);
    else if (event.heading !== this.heading) this.line(`  cell ${place}  ${event.heading}`);
    this.heading = event.heading;
  };

  /** Clears the line that changes in place. */
  end(): void {
    if (this.open) this.stream.write('\r\u001b[K');
    this.open = false;
  }

  line(text: string): void {
    this.end();
    this.stream.write(`${this.stream.isTTY ? text : stripVTControlCharacters(text)}\n`);
  }

  private inPlace(text: string): void {
    const width = (this.stream.columns ?? 80) - 1;
    this.stream.write(`\r\u001b[K${text.length > width ? `${text.slice(0, width - 1)}…` : text}`);
    this.open = true;
  }
}

/** Exit status of the command line for each way a run can end. */
export const exitStatus: Readonly<Record<NotebookRun['status'], number>> = { ok: 0, failed: 1, 'timed out': 3, stopped: 130 };

/** A run's failures as text for the terminal. */
export function failureText(run: NotebookRun, name: string): string {
  const parts = run.failures.map(({ cell, traceback }) => `${name}, code cell ${cell} of ${run.cellsInAll}:\n${traceback.map((line) => `  ${line}`).join('\n')}`);
  if (run.status === 'stopped') parts.push(`${name} was stopped after ${run.cellsRun} of ${run.cellsInAll} cells.`);
  return parts.join('\n\n');
}

/** Labelled lines in two columns. */
export function summaryText(lines: readonly (readonly [string, string | number])[]): string {
  const width = Math.max(0, ...lines.map(([label]) => label.length));
  return lines.map(([label, value]) => `  ${label.padEnd(width)}  ${value}`).join('\n');
}
