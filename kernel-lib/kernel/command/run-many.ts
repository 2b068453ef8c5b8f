import { relative, resolve } from 'node:path';
import { tableText } from '../../display';
import { runOverSheets } from '../notebook/run-many';
import { parseSetting, type ParameterValue } from '../notebook/parameters';
import { interruptKey, type RunCommand } from './run';
import { TerminalProgress } from './terminal';

/** `wedgework run notebook.ipynb --over folder`. @returns the exit status: 0 when every sheet is finished */
export async function runManyCommand(notebook: string, folder: string, options: RunCommand & { readonly jobs?: string; readonly sheetName?: string; readonly again?: boolean }): Promise<number> {
  const set: Record<string, ParameterValue> = Object.fromEntries(options.set.map(parseSetting));
  const progress = new TerminalProgress(process.stderr, options.quiet ?? false);
  const { signal, release } = interruptKey();
  try {
    const out = options.out ?? 'results';
    const { runs } = await runOverSheets(notebook, folder, {
      out,
      set,
      parameter: options.sheetName,
      jobs: options.jobs === undefined ? undefined : Number(options.jobs),
      again: options.again,
      html: options.html !== undefined,
      report: options.report !== undefined,
      timeout: options.timeout === undefined ? undefined : Number(options.timeout),
      signal,
      onProgress: (run, done, of) => (options.quiet === true ? undefined : progress.line(`  ${done}/${of}  ${run.sheet}: ${run.status}${run.failure === '' ? '' : ` (${run.failure})`}`)),
    });
    if (options.quiet !== true) {
      const rows = runs.map(({ sheet, status, seconds, failure }) => [sheet, status, status === 'kept' ? '' : `${seconds.toFixed(1)} s`, failure]);
      console.log(tableText({ columns: ['sheet', 'status', 'time', 'failure'], rows }));
      console.log(`Results: ${relative(process.cwd(), resolve(out)) || '.'}/, summary.csv`);
    }
    return runs.every(({ status }) => status === 'ok' || status === 'kept') ? 0 : 1;
  } finally {
    release();
  }
}
