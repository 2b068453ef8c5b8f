/// <reference lib="dom" />
import { spawn, type ChildProcess } from 'node:child_process';
import { cpSync, mkdirSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { join } from 'node:path';
import { chromium as browserType, type Browser, type Page } from 'playwright-core';
import { artifacts, chromium, jupyterEnvironment, pictures, python, root } from './environment';

const token = 'notebook-tests';
const work = join(artifacts, 'lab-work');

export const gallery = readdirSync(join(root, 'notebooks')).filter((name) => name.endsWith('.ipynb'));

/** A running JupyterLab on a copy of the notebooks, and a browser that looks at it. */
export class Lab {
  private constructor(
    private readonly server: ChildProcess,
    private readonly browser: Browser,
    private readonly port: number,
  ) {}

  static async start(): Promise<Lab> {
    rmSync(work, { recursive: true, force: true });
    mkdirSync(work, { recursive: true });
    cpSync(join(root, 'notebooks'), work, { recursive: true });
    cpSync(join(__dirname, 'notebooks'), work, { recursive: true });
    configure();
    const port = await freePort();
    const args = ['-m', 'jupyterlab', '--no-browser', '--allow-root', `--port=${port}`, '--ip=127.0.0.1', `--ServerApp.root_dir=${work}`, `--IdentityProvider.token=${token}`, '--expose-app-in-browser'];
    const server = spawn(python, args, { cwd: work, env: jupyterEnvironment, stdio: ['ignore', 'ignore', 'pipe'] });
    await new Promise<void>((resolve, reject) => {
      let said = '';
      server.stderr!.setEncoding('utf8').on('data', (text: string) => {
        said += text;
        if (said.includes('is running at')) resolve();
      });
      server.once('exit', () => reject(new Error(`JupyterLab ended: ${said}`)));
    });
    const browser = await browserType.launch({ executablePath: chromium, args: ['--no-sandbox', '--disable-gpu'] });
    return new Lab(server, browser, port);
  }

  async open(notebook: string): Promise<LabNotebook> {
    const page = await this.browser.newPage({ viewport: { width: 1300, height: 1000 } });
    await page.goto(`http://127.0.0.1:${this.port}/lab/tree/${notebook}?token=${token}&reset`);
    await page.waitForFunction(() => (window as unknown as LabWindow).jupyterapp?.shell?.currentWidget?.sessionContext?.session?.kernel != null, undefined, { timeout: 120_000 });
    await page.evaluate(async () => {
      const { currentWidget } = (window as unknown as LabWindow).jupyterapp.shell;
      await currentWidget.context.ready;
      await currentWidget.sessionContext.ready;
    });
    return new LabNotebook(page);
  }

  async end(): Promise<void> {
    await this.browser.close();
    this.server.kill('SIGTERM');
    await new Promise((resolve) => this.server.once('exit', resolve));
  }
}

interface LabWidget {
  context: { ready: Promise<void>; save(): Promise<void> };
  sessionContext: { ready: Promise<void>; session: { kernel: { interrupt(): Promise<void>; shutdown(): Promise<void> } } };
  content: { widgets: { model: { toJSON(): Cell } }[]; activeCellIndex: number; mode: string };
}

interface LabWindow {
  jupyterapp: { shell: { currentWidget: LabWidget }; commands: { execute(name: string, args?: object): Promise<unknown> } };
}

export interface Cell {
  cell_type: string;
  id: string;
  source: string | string[];
  execution_count: number | null;
  outputs?: { output_type: string; ename?: string; traceback?: string[]; data?: Record<string, unknown> }[];
}

/** A notebook open in the browser. */
export class LabNotebook {
  constructor(readonly page: Page) {}

  command(name: string, args: object = {}): Promise<void> {
    return this.page.evaluate(async ([command, given]) => void (await (window as unknown as LabWindow).jupyterapp.commands.execute(command as string, given as object)), [name, args] as const);
  }

  cells(): Promise<Cell[]> {
    return this.page.evaluate(() => (window as unknown as LabWindow).jupyterapp.shell.currentWidget.content.widgets.map(({ model }) => model.toJSON()));
  }

  select(index: number): Promise<void> {
    return this.page.evaluate((i) => void ((window as unknown as LabWindow).jupyterapp.shell.currentWidget.content.activeCellIndex = i), index);
  }

  interrupt(): Promise<void> {
    return this.page.evaluate(() => (window as unknown as LabWindow).jupyterapp.shell.currentWidget.sessionContext.session.kernel.interrupt());
  }

  async close(): Promise<void> {
    await this.page.evaluate(() => (window as unknown as LabWindow).jupyterapp.shell.currentWidget.sessionContext.session.kernel.shutdown());
    await this.page.close();
  }

  async screenshot(name: string): Promise<void> {
    await this.page.screenshot({ path: join(pictures, `${name}.png`) });
  }
}

/** No news dialog, every output drawn whether in sight or not, words beside the completions. */
function configure(): void {
  const write = (folder: string, name: string, content: object) => {
    mkdirSync(folder, { recursive: true });
    writeFileSync(join(folder, name), JSON.stringify(content));
  };
  const { JUPYTER_CONFIG_DIR: configuration } = jupyterEnvironment;
  write(join(configuration, 'labconfig'), 'page_config.json', { disabledExtensions: { '@jupyterlab/apputils-extension:announcements': true } });
  write(join(configuration, 'lab/user-settings/@jupyterlab/notebook-extension'), 'tracker.jupyterlab-settings', { windowingMode: 'none' });
  write(join(configuration, 'lab/user-settings/@jupyterlab/completer-extension'), 'manager.jupyterlab-settings', { showDocumentationPanel: true });
}

function freePort(): Promise<number> {
  return new Promise((resolve) => {
    const server = createServer().listen(0, '127.0.0.1', () => {
      const { port } = server.address() as { port: number };
      server.close(() => resolve(port));
    });
  });
}
