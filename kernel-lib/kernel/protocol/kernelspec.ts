import { copyFileSync, existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { homedir } from 'node:os';
import { join } from 'node:path';
import { writeWhole } from '../../display';
import { libraryFolder } from '../../tables';

/** Name of the kernel's folder, and what front ends ask for. */
export const kernelName = 'wedgework';
const logos = ['logo-32x32.png', 'logo-64x64.png', 'logo-svg.svg'];

/** Where a kernel can be installed: for the user, under a prefix such as /usr/local, or in a Python virtual environment. */
export interface Place {
  readonly prefix?: string;
  readonly venv?: string | true;
}

/** Folder of the user's own kernels, as Jupyter looks for them. */
export function userKernels(environment: NodeJS.ProcessEnv = process.env, platform: NodeJS.Platform = process.platform): string {
  if (environment.JUPYTER_DATA_DIR) return join(environment.JUPYTER_DATA_DIR, 'kernels');
  if (platform === 'darwin') return join(homedir(), 'Library', 'Jupyter', 'kernels');
  if (platform === 'win32') return join(environment.APPDATA ?? join(homedir(), 'AppData', 'Roaming'), 'jupyter', 'kernels');
  return join(environment.XDG_DATA_HOME || join(homedir(), '.local', 'share'), 'jupyter', 'kernels');
}

function kernelsFolder(place: Place): string {
  if (place.prefix !== undefined) return join(place.prefix, 'share', 'jupyter', 'kernels');
  if (place.venv === undefined) return userKernels();
  const venv = place.venv === true ? (process.env.VIRTUAL_ENV ?? process.env.CONDA_PREFIX) : place.venv;
  if (venv === undefined || venv === '') throw new RangeError('No virtual environment is active. Activate it first, or name its folder: --venv path/to/it.');
  if (!existsSync(venv)) throw new RangeError(`There is no virtual environment ${venv}.`);
  return join(venv, 'share', 'jupyter', 'kernels');
}

/** Installs the kernel so that Jupyter front ends offer it. Needs no Python. @returns its folder */
export function installKernel(place: Place): string {
  const library = libraryFolder();
  const launcher = join(library, 'dist', 'kernel', 'cli.js');
  if (!existsSync(launcher)) throw new Error('The library is not built. Run "npm run build" in the repository, then try again.');
  const folder = join(kernelsFolder(place), kernelName);
  mkdirSync(folder, { recursive: true });
  const spec = {
    argv: [process.execPath, launcher, 'kernel', 'start', '--connection-file', '{connection_file}'],
    display_name: 'wedgework (TypeScript)',
    language: 'typescript',
    interrupt_mode: process.platform === 'win32' ? 'message' : 'signal',
    metadata: { debugger: false },
  };
  for (const logo of logos) copyFileSync(join(library, 'assets', logo), join(folder, logo));
  writeWhole(join(folder, 'kernel.json'), `${JSON.stringify(spec, null, 1)}\n`);
  return folder;
}

export interface InstalledKernel {
  readonly folder: string;
  /** Whether what it starts is still there. */
  readonly works: boolean;
}

/** Where this kernel is installed, of the places that can be known: the user's, the active environment's, the system's, and a named one. */
export function installedKernels(place: Place = {}): readonly InstalledKernel[] {
  const active = [process.env.VIRTUAL_ENV, process.env.CONDA_PREFIX, '/usr/local', '/usr', place.prefix, place.venv === true ? undefined : place.venv];
  const folders = [userKernels(), ...active.filter((path) => path !== undefined && path !== '').map((path) => join(path!, 'share', 'jupyter', 'kernels'))];
  const found: InstalledKernel[] = [];
  for (const kernels of new Set(folders)) {
    const folder = join(kernels, kernelName);
    const file = join(folder, 'kernel.json');
    if (existsSync(file)) found.push({ folder, works: startsSomething(file) });
  }
  return found;
}

function startsSomething(file: string): boolean {
  try {
    const [program, launcher] = (JSON.parse(readFileSync(file, 'utf8')) as { argv: string[] }).argv;
    return existsSync(program) && existsSync(launcher);
  } catch {
    return false;
  }
}

/** Removes the kernel from a place. @returns its folder; undefined where it was not installed */
export function removeKernel(place: Place): string | undefined {
  const folder = join(kernelsFolder(place), kernelName);
  if (!existsSync(join(folder, 'kernel.json'))) return undefined;
  rmSync(folder, { recursive: true });
  return folder;
}
