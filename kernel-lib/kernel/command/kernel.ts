import { resolve } from 'node:path';
import { installedKernels, installKernel, removeKernel, type Place } from '../protocol/kernelspec';

/** How often a kernel looks whether the program that started it is still there, in milliseconds. */
const orphanCheck = 2_000;

function place(options: Place): Place {
  const { prefix, venv } = options;
  return { ...(prefix !== undefined && { prefix: resolve(prefix) }), ...(venv !== undefined && { venv: venv === true ? true : resolve(venv) }) };
}

export function installCommand(options: Place): number {
  console.log(`Installed in ${installKernel(place(options))}\nChoose "wedgework (TypeScript)" in JupyterLab, Jupyter Notebook or VS Code.`);
  return 0;
}

export function listCommand(options: Place): number {
  const found = installedKernels(place(options));
  if (found.length === 0) console.log('Not installed. "wedgework kernel install" does it.');
  for (const { folder, works } of found) console.log(works ? folder : `${folder}  (what it starts is gone: install it again, or remove it)`);
  return 0;
}

export function removeCommand(options: Place): number {
  const folder = removeKernel(place(options));
  console.log(folder === undefined ? 'It was not installed there.' : `Removed ${folder}`);
  return folder === undefined ? 1 : 0;
}

/** Runs the kernel until a front end shuts it down. Started by front ends through the installed kernelspec. */
export async function startKernel(connectionFile: string): Promise<number> {
  // Loaded here: the other commands need no sockets.
  // eslint-disable-next-line @typescript-eslint/no-require-imports
  const { Kernel } = require('../protocol/kernel') as typeof import('../protocol/kernel');
  const kernel = await Kernel.start(connectionFile, process.cwd());
  process.on('SIGINT', () => kernel.interrupt());
  process.on('SIGTERM', () => void kernel.end(0));
  const starter = process.ppid;
  setInterval(() => {
    if (process.ppid !== starter) void kernel.end(0);
  }, orphanCheck).unref();
  return new Promise(() => {});
}
