#!/usr/bin/env node
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { Command } from 'commander';
import { runCommand, type RunCommand } from './command/run';
import { startCommand } from './command/start';

/** Exit status for a command that could not begin: a bad option, a file that is not there. */
const badUse = 2;

function version(): string {
  for (const up of ['..', join('..', '..')]) {
    try {
      const content = JSON.parse(readFileSync(join(__dirname, up, 'package.json'), 'utf8')) as { name?: string; version: string };
      if (content.name === 'wedgework') return content.version;
    } catch {
      // Not at this height: the sources and the build lie at different ones.
    }
  }
  return 'unknown';
}

const finish = (work: Promise<number>): Promise<void> =>
  work.then(
    (status) => void (process.exitCode = status),
    (error: unknown) => {
      console.error(error instanceof Error ? error.message : String(error));
      process.exitCode = badUse;
    },
  );

const program = new Command('wedgework')
  .description('Arc-lava geochemistry in TypeScript notebooks: from assay sheets to named rocks, series, sources, models and evidence.')
  .version(version())
  .showHelpAfterError()
  .exitOverride((error) => process.exit(error.exitCode === 0 ? 0 : badUse));

program
  .command('start')
  .description('name the rocks of a sheet (default: the demo workbook) and write notebook, page and tables to results/')
  .argument('[sheet]', 'a .csv, .tsv or .xlsx file of analyses')
  .option('-q, --quiet', 'no progress lines')
  .action((sheet: string | undefined, options: { quiet?: boolean }) => finish(startCommand(sheet, options)));

program
  .command('run')
  .description('run a notebook from top to bottom in a process of its own')
  .argument('<notebook>', 'an .ipynb file')
  .option('-s, --set <name=value>', 'value for a name in the cell tagged "parameters"; may be given again', (text: string, all: string[]) => [...all, text], [] as string[])
  .option('-o, --out <file>', 'where the executed notebook goes (default: <name>.executed.ipynb here)')
  .option('--html [file]', 'also write one HTML page, beside the executed notebook unless a file is named')
  .option('-t, --timeout <seconds>', 'longest time for one cell')
  .option('-k, --keep-going', 'run on after a cell that failed')
  .option('-q, --quiet', 'no progress lines, no summary')
  .action((notebook: string, options: RunCommand) => finish(runCommand(notebook, options)));

void program.parseAsync();
