import { execFile } from 'node:child_process';
import { existsSync, mkdirSync } from 'node:fs';
import { join } from 'node:path';

export const root = join(__dirname, '../..');
export const artifacts = join(root, '.artifacts');
const venv = join(artifacts, 'jupyter');
export const python = join(venv, 'bin/python');

/** Screenshots, converted notebooks and printed pages, to be looked at. */
export const pictures = join(artifacts, 'notebook-tests');
mkdirSync(pictures, { recursive: true });

export const chromium = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'].find((path) => existsSync(path));

/** Only this environment's kernels and settings are seen, whatever the machine has. */
export const jupyterEnvironment = {
  ...process.env,
  PATH: `${join(venv, 'bin')}:${process.env.PATH}`,
  JUPYTER_CONFIG_DIR: join(artifacts, 'jupyter-config'),
  JUPYTER_DATA_DIR: join(artifacts, 'jupyter-data'),
  JUPYTER_RUNTIME_DIR: join(artifacts, 'jupyter-runtime'),
  JUPYTER_PREFER_ENV_PATH: '1',
  PYDEVD_DISABLE_FILE_VALIDATION: '1',
};

/** Runs a program of the Python environment. */
export function pythonRun(args: readonly string[], cwd = __dirname): Promise<{ status: number; output: string }> {
  return new Promise((resolve) =>
    execFile(python, args, { cwd, env: jupyterEnvironment, maxBuffer: 1 << 28 }, (error, stdout, stderr) =>
      resolve({ status: error === null ? 0 : Number(error.code ?? 1), output: stdout + stderr }),
    ),
  );
}
