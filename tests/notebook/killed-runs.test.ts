import { spawn } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { built } from '../kernel/engine';
import { madeRun } from '../kernel/made-run';

// Fifty whole runs take too long for every change's tests; this stands with the other slow checks.
const { runNotebook } = createRequire(__filename)(join(built, 'index.js')) as typeof import('../../kernel-lib');
const command = join(built, 'kernel/cli.js');
const folders: string[] = [];
const made = () => {
  const run = madeRun();
  folders.push(run.folder);
  return run;
};
afterAll(() => folders.forEach((folder) => rmSync(folder, { recursive: true, force: true })));

describe('a run that is killed', () => {
  it('leaves no half-written file under its final name, wherever it is cut', async () => {
    const run = made();
    const kills = 50;
    const started = performance.now();
    await runNotebook(run.notebook, { out: run.out, html: run.out.replace('.ipynb', '.html') });
    const span = performance.now() - started;
    const whole = Object.fromEntries(readdirSync(join(run.folder, 'out')).map((name) => [name, readFileSync(join(run.folder, 'out', name), 'utf8')]));
    let cut = 0;
    const one = async (i: number) => {
      const out = join(run.folder, `out-${i}`);
      const child = spawn(process.execPath, [command, 'run', run.notebook, '--out', join(out, 'lavas.ipynb'), '--html', '--quiet'], { stdio: 'ignore', detached: true });
      const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
      // Spread over the whole run, and closer together about its end, when files are written.
      const after = span * (i % 2 === 0 ? i / kills : 0.8 + (0.6 * i) / kills);
      const timer = setTimeout(() => process.kill(-child.pid!, 'SIGKILL'), after);
      await ended;
      clearTimeout(timer);
      const left = existsSync(out) ? readdirSync(out).filter((name) => !name.startsWith('.')) : [];
      if (left.length < 3) cut++;
      for (const name of left) {
        const text = readFileSync(join(out, name), 'utf8');
        // The record of this folder names its own place; everything else is the same to the byte.
        if (name.endsWith('.record.json')) expect(JSON.parse(text)).toHaveProperty('cells');
        else expect(text, name).toBe(whole[name]);
      }
    };
    for (let i = 0; i < kills; i += 5) await Promise.all([0, 1, 2, 3, 4].map((k) => one(i + k)));
    expect(cut).toBeGreaterThan(5);
  }, 600_000);
});
