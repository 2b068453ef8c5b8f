import { basename, relative, resolve } from 'node:path';
import { parseSetting, type ParameterValue } from '../notebook/parameters';
import { runNotebook } from '../notebook/run';
import { exitStatus, failureText, summaryText, TerminalProgress } from './terminal';

/** Options of `wedgework run`, as the command line gives them. */
export interface RunCommand {
  readonly set: readonly string[];
  readonly out?: string;
  readonly html?: string | true;
  readonly report?: string | true;
  readonly timeout?: string;
  readonly keepGoing?: boolean;
  readonly quiet?: boolean;
}

/** A signal that the interrupt key aborts; pressed a second time it ends the program. */
export function interruptKey(): { signal: AbortSignal; release: () => void } {
  const controller = new AbortController();
  const press = () => {
    if (controller.signal.aborted) process.exit(130);
    process.stderr.write('\nStopping (press again to end at once) …\n');
    controller.abort();
  };
  process.on('SIGINT', press);
  process.on('SIGTERM', press);
  return { signal: controller.signal, release: () => void process.off('SIGINT', press).off('SIGTERM', press) };
}

/** `wedgework run`. @returns the exit status */
export async function runCommand(notebook: string, options: RunCommand): Promise<number> {
  const set: Record<string, ParameterValue> = Object.fromEntries(options.set.map(parseSetting));
  const timeout = options.timeout === undefined ? undefined : Number(options.timeout);
  const name = basename(notebook, '.ipynb');
  const out = options.out ?? `${name}.executed.ipynb`;
  const progress = new TerminalProgress(process.stderr, options.quiet ?? false);
  const { signal, release } = interruptKey();
  try {
    if (!options.quiet) progress.line(`Running ${notebook}`);
    const html = options.html === true ? out.replace(/(\.ipynb)?$/, '.html') : options.html;
    const stem = out.replace(/(\.ipynb)?$/, '');
    const report = options.report === true ? [`${stem}.report.html`, `${stem}.report.pdf`] : options.report;
    const run = await runNotebook(notebook, { set, out, html, report, timeout, keepGoing: options.keepGoing, quiet: options.quiet, onProgress: progress.tell, signal });
    progress.end();
    if (run.failures.length > 0 || run.status !== 'ok') progress.line(failureText(run, basename(notebook)));
    if (!options.quiet) {
      const files = run.written.map((path) => ['Written', relative(process.cwd(), resolve(path))] as const);
      console.log(summaryText([...run.summary, ['Cells run', `${run.cellsRun} of ${run.cellsInAll} in ${run.seconds.toFixed(1)} s`], ...files]));
    }
    return exitStatus[run.status];
  } finally {
    progress.end();
    release();
  }
}
