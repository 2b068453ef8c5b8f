import { existsSync, mkdirSync, readdirSync, statSync } from 'node:fs';
import { basename, dirname, extname, join, relative, resolve } from 'node:path';
import { runNotebook } from '../notebook/run';
import { interruptKey } from './run';
import { exitStatus, failureText, summaryText, TerminalProgress } from './terminal';

const mainNotebook = '01-named-suite.ipynb';
const demoSheet = join('data', 'oruvai-arc.xlsx');

/** The folder notebooks/ beside the library, found by walking up from this file. */
function notebookFolder(): string {
  for (let at = __dirname; ; at = dirname(at)) {
    if (existsSync(join(at, 'notebooks', mainNotebook))) return join(at, 'notebooks');
    if (dirname(at) === at) {
      const instead = '"wedgework start" works in a clone of the repository; elsewhere use "wedgework run your-notebook.ipynb".';
      throw new RangeError(`The notebook ${mainNotebook} was not found beside the library. ${instead}`);
    }
  }
}

/**
 * `wedgework start`: the main job on the demo workbook or on the user's own sheet. The executed notebook, an HTML page and what the
 * notebook itself writes go to results/<sheet name>/ in the current folder.
 *
 * @returns the exit status
 */
export async function startCommand(sheet: string | undefined, options: { readonly quiet?: boolean }): Promise<number> {
  const folder = notebookFolder();
  const path = sheet === undefined ? join(folder, demoSheet) : resolve(sheet);
  if (!existsSync(path) || !statSync(path).isFile()) {
    throw new RangeError(`There is no sheet ${sheet ?? path}. Give the path of a .csv, .tsv or .xlsx file.`);
  }
  const results = resolve('results', basename(path, extname(path)));
  mkdirSync(results, { recursive: true });
  const progress = new TerminalProgress(process.stderr, options.quiet ?? false);
  const { signal, release } = interruptKey();
  try {
    progress.line(`From ${relative(process.cwd(), path)} to named rocks and diagrams`);
    // Relative to the notebook, so that the same run in another place gives the same file.
    const set = { sheet: slashes(relative(folder, path)), results: slashes(relative(folder, results)) };
    const name = basename(mainNotebook, '.ipynb');
    const run = await runNotebook(join(folder, mainNotebook), {
      set,
      out: join(results, `${name}.ipynb`),
      html: join(results, `${name}.html`),
      quiet: options.quiet,
      onProgress: progress.tell,
      signal,
    });
    progress.end();
    if (run.status !== 'ok') progress.line(failureText(run, mainNotebook));
    const lines = [...run.summary, ['Time', `${run.seconds.toFixed(1)} s`], ['Results', `${relative(process.cwd(), results)}/`]] as const;
    console.log(`\n${summaryText(lines)}`);
    for (const file of readdirSync(results).filter((entry) => !entry.startsWith('.')).sort()) console.log(`    ${file}`);
    return exitStatus[run.status];
  } finally {
    progress.end();
    release();
  }
}

const slashes = (path: string): string => path.replaceAll('\\', '/');
