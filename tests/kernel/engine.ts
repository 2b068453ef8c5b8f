import { existsSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';

/**
 * The built library: an engine is a process of its own, so these tests run what a user runs. `npm test` builds it first.
 */
export const built = join(__dirname, '../../kernel-lib/dist');
if (!existsSync(join(built, 'kernel/cli.js'))) throw new Error('Build the library first: npm run build.');

const load = createRequire(__filename);
const { EngineProcess } = load(join(built, 'kernel/engine/engine-process.js')) as typeof import('../../kernel-lib/kernel/engine/engine-process');
export const { runNotebook, notebookHtml } = load(join(built, 'index.js')) as typeof import('../../kernel-lib');
export type Engine = InstanceType<typeof EngineProcess>;
export type Output = Parameters<Parameters<Engine['execute']>[1]>[0];

/** A running engine with a short way to run a cell. */
export function startEngine(options: { folder?: string; preload?: boolean } = {}) {
  const engine = new EngineProcess({ folder: options.folder ?? __dirname, preload: options.preload ?? true, quiet: false });
  let count = 0;
  const run = async (code: string) => {
    const outputs: Output[] = [];
    const reply = await engine.execute({ code, label: `cell [${++count}]` }, (output) => outputs.push(output));
    const printed = (name: string) => outputs.map((output) => (output.kind === 'stream' && output.name === name ? output.text : '')).join('');
    const shown = outputs.flatMap((output) => ('data' in output ? [output] : []));
    return { reply, outputs, shown, stdout: printed('stdout'), stderr: printed('stderr'), text: shown[0]?.data['text/plain'] };
  };
  /** Runs a cell and interrupts it. @returns how long it took to stop, too */
  const runAndInterrupt = async (code: string, after: number) => {
    let asked = 0;
    setTimeout(() => {
      asked = performance.now();
      engine.interrupt();
    }, after);
    const result = await run(code);
    return { ...result, stopped: performance.now() - asked };
  };
  return { engine, run, runAndInterrupt };
}
