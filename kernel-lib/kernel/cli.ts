#!/usr/bin/env node
import { Command } from 'commander';
import { libraryVersion } from '../suite';
import { installCommand, listCommand, removeCommand, startKernel } from './command/kernel';
import { runCommand, type RunCommand } from './command/run';
import { runManyCommand } from './command/run-many';
import { startCommand } from './command/start';
import { verifyCommand } from './command/verify';
import type { Place } from './protocol/kernelspec';

/** Exit status for a command that could not begin: a bad option, a file that is not there. */
const badUse = 2;

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
  .version(libraryVersion())
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
  .option('--report [file]', 'also write a report without code, as .html and .pdf, or the one that is named')
  .option('-t, --timeout <seconds>', 'longest time for one cell')
  .option('-k, --keep-going', 'run on after a cell that failed')
  .option('-q, --quiet', 'no progress lines, no summary')
  .option('--over <folder>', 'run it once for every sheet in a folder; --out then names the folder for the results')
  .option('--sheet-name <name>', 'with --over: the parameter that takes the sheet (default: sheet)')
  .option('-j, --jobs <number>', 'with --over: runs at once (default: one a processor)')
  .option('--again', 'with --over: also run sheets whose results are finished and current')
  .action((notebook: string, options: RunCommand & { over?: string; jobs?: string; sheetName?: string; again?: boolean }) =>
    finish(options.over === undefined ? runCommand(notebook, options) : runManyCommand(notebook, options.over, options)),
  );

program
  .command('verify')
  .description('run a notebook again as its record says, and name whatever comes out otherwise')
  .argument('<notebook>', 'an executed .ipynb file with its .record.json beside it')
  .option('-t, --timeout <seconds>', 'longest time for one cell')
  .option('--tolerance <relative>', 'on another platform, the relative difference below which numbers are the same (default 1e-9)')
  .option('-q, --quiet', 'no progress lines')
  .action((notebook: string, options: { timeout?: string; tolerance?: string; quiet?: boolean }) => finish(verifyCommand(notebook, options)));

const kernel = program.command('kernel').description('install, list or remove the Jupyter kernel');
const placed = (command: Command): Command =>
  command
    .option('--user', "among the user's own kernels (the default)")
    .option('--prefix <folder>', 'under a folder such as /usr/local')
    .option('--venv [folder]', 'in a Python virtual environment: the active one, or the named one');
/** The work starts inside the promise, so that a fault is told like any other. */
const later = (work: () => number): Promise<void> => finish(Promise.resolve().then(work));
placed(kernel.command('install').description('make the kernel known to Jupyter front ends; needs no Python')).action((options: Place) => later(() => installCommand(options)));
placed(kernel.command('list').description('where the kernel is installed')).action((options: Place) => later(() => listCommand(options)));
placed(kernel.command('remove').description('take the kernel away again')).action((options: Place) => later(() => removeCommand(options)));
kernel
  .command('start', { hidden: true })
  .requiredOption('--connection-file <file>')
  .action((options: { connectionFile: string }) => finish(startKernel(options.connectionFile)));

void program.parseAsync();
