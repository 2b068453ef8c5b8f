#!/usr/bin/env node
// What the notebook tests need besides Node: a Python environment of their own with Jupyter in it, our kernel and the stock tslab kernel
// in that environment, a Chromium and pandoc. All of it stays in the git-ignored folder .artifacts/, except the last two, which
// Debian's packages bring where they are missing.
import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { accessSync, constants, existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { delimiter, dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const here = dirname(fileURLToPath(import.meta.url));
const root = join(here, '..', '..');
const venv = join(root, '.artifacts', 'jupyter');
const python = join(venv, 'bin', 'python');

const run = (command, args, options = {}) => execFileSync(command, args, { stdio: ['ignore', 'inherit', 'inherit'], ...options });
const tried = (command, args) => {
  try {
    execFileSync(command, args, { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
};
const onPath = (name) =>
  (process.env.PATH ?? '').split(delimiter).map((folder) => join(folder, name)).find((path) => {
    try {
      accessSync(path, constants.X_OK);
      return true;
    } catch {
      return false;
    }
  });

let listed = false;
function debian(...packages) {
  if (process.getuid?.() !== 0 || onPath('apt-get') === undefined) {
    console.error(`The notebook tests need ${packages.join(', ')}. Install it, then run them again.`);
    process.exit(1);
  }
  if (!listed) run('apt-get', ['update', '-qq']);
  listed = true;
  console.log(`Installing ${packages.join(', ')} …`);
  run('apt-get', ['install', '-y', '-qq', '--no-install-recommends', ...packages], { stdio: ['ignore', 'ignore', 'inherit'], env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' } });
}

const requirements = readFileSync(join(here, 'requirements.txt'), 'utf8');
const stamp = join(venv, '.requirements');
const wanted = createHash('sha256').update(requirements).update(root).digest('hex');
if (!existsSync(stamp) || readFileSync(stamp, 'utf8') !== wanted || !tried(python, ['--version'])) {
  console.log('Making the Python environment of the notebook tests …');
  rmSync(venv, { recursive: true, force: true });
  mkdirSync(dirname(venv), { recursive: true });
  if (onPath('python3') === undefined) debian('python3', 'python3-venv');
  if (!tried('python3', ['-m', 'venv', venv])) {
    debian('python3-venv');
    run('python3', ['-m', 'venv', venv]);
  }
  run(python, ['-m', 'pip', 'install', '--quiet', '--disable-pip-version-check', '-r', join(here, 'requirements.txt')]);
  writeFileSync(stamp, wanted);
}

if (['chromium', 'chromium-browser', 'google-chrome'].every((name) => onPath(name) === undefined)) debian('chromium');
// For nbconvert's LaTeX.
if (onPath('pandoc') === undefined) debian('pandoc');
// Opens written workbooks.
if (onPath('soffice') === undefined) debian('libreoffice-calc');

run(process.execPath, [join(root, 'kernel-lib', 'dist', 'kernel', 'cli.js'), 'kernel', 'install', '--venv', venv], { stdio: ['ignore', 'ignore', 'inherit'] });
const stock = join(venv, 'share', 'jupyter', 'kernels', 'tslab');
mkdirSync(stock, { recursive: true });
const argv = [process.execPath, join(root, 'node_modules', 'tslab', 'bin', 'tslab'), 'kernel', '--config-path={connection_file}'];
writeFileSync(join(stock, 'kernel.json'), JSON.stringify({ argv, display_name: 'TypeScript (tslab)', language: 'typescript' }));
