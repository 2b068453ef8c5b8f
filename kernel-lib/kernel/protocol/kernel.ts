import { EngineGone, EngineProcess } from '../engine/engine-process';
import type { CellOutput } from '../output';
import { libraryVersion } from '../../suite';
import { History } from './history';
import { charactersFromUnits, unitsFromCharacters } from './positions';
import { KernelSockets, type Channel } from './sockets';
import { symbolText } from './symbol-text';
import { protocolVersion, type Message } from './wire';

/** How long a kernel waits, after a failed cell, for cells sent together with it that are still on their way. In milliseconds. */
const abortWindow = 20;

/**
 * A Jupyter kernel: this process speaks the protocol, and an engine process runs the cells, so that interrupt, heartbeat and shutdown
 * are answered whatever a cell does.
 */
export class Kernel {
  private readonly engine: EngineProcess;
  private readonly history = new History();
  private readonly queue: Message[] = [];
  private sockets!: KernelSockets;
  private count = 0;
  private working = false;
  private over = false;

  private constructor(folder: string) {
    this.engine = new EngineProcess({ folder, preload: true, quiet: false });
  }

  /** Starts a kernel on the sockets of a connection file. Resolves when it listens. */
  static async start(connectionFile: string, folder: string): Promise<Kernel> {
    const kernel = new Kernel(folder);
    kernel.sockets = await KernelSockets.open(connectionFile, (channel, message) => kernel.receive(channel, message));
    kernel.sockets.publish(undefined, 'status', { execution_state: 'starting' });
    void kernel.engine.ended.then(() => kernel.end(1));
    return kernel;
  }

  interrupt(): void {
    this.engine.interrupt();
  }

  /** Ends the engine, then this process. */
  async end(status: number): Promise<void> {
    if (this.over) return;
    this.over = true;
    await this.engine.end();
    // The engine's end may have been an answer to a cell, which is still on its way.
    await new Promise((resolve) => setTimeout(resolve, 50));
    await this.sockets.close();
    process.exit(status);
  }

  private receive(channel: Channel, message: Message): void {
    if (channel === 'control') {
      void this.handle('control', message);
      return;
    }
    this.queue.push(message);
    if (!this.working) void this.work();
  }

  /** Shell messages are handled one after the other, as the protocol asks. */
  private async work(): Promise<void> {
    this.working = true;
    for (let message = this.queue.shift(); message !== undefined; message = this.queue.shift()) await this.handle('shell', message);
    this.working = false;
  }

  private async handle(channel: Channel, message: Message): Promise<void> {
    this.sockets.publish(message, 'status', { execution_state: 'busy' });
    try {
      await this.answer(channel, message);
    } catch (error) {
      const evalue = error instanceof Error ? error.message : String(error);
      const type = message.header.msg_type.replace(/_request$/, '_reply');
      this.sockets.reply(channel, message, type, { status: 'error', ename: error instanceof Error ? error.name : 'Error', evalue, traceback: [] });
      if (!(error instanceof EngineGone)) console.error(error);
    } finally {
      this.sockets.publish(message, 'status', { execution_state: 'idle' });
    }
    if (message.header.msg_type === 'shutdown_request') void this.end(0);
  }

  private async answer(channel: Channel, message: Message): Promise<void> {
    const { content } = message;
    const reply = (type: string, body: object) => this.sockets.reply(channel, message, type, { status: 'ok', ...body });
    switch (message.header.msg_type) {
      case 'kernel_info_request':
        return reply('kernel_info_reply', kernelInfo());
      case 'execute_request':
        return this.execute(message);
      case 'complete_request': {
        const code = String(content.code);
        const { start, end, matches } = await this.engine.complete({ code, cursor: unitsFromCharacters(code, Number(content.cursor_pos)) });
        const [from, to] = [charactersFromUnits(code, start), charactersFromUnits(code, end)];
        const typed = matches.map(({ text, kind }) => ({ start: from, end: to, text, type: kind }));
        return reply('complete_reply', {
          matches: matches.map(({ text }) => text),
          cursor_start: from,
          cursor_end: to,
          metadata: { _jupyter_types_experimental: typed },
        });
      }
      case 'inspect_request': {
        const code = String(content.code);
        const { found } = await this.engine.inspect({ code, cursor: unitsFromCharacters(code, Number(content.cursor_pos)) });
        const text = found === null ? undefined : symbolText(found);
        const data = text === undefined ? {} : { 'text/plain': text.plain, 'text/markdown': text.markdown };
        return reply('inspect_reply', { found: text !== undefined, data, metadata: {} });
      }
      case 'is_complete_request': {
        const { complete, indent } = await this.engine.isComplete({ code: String(content.code) });
        return reply('is_complete_reply', complete ? { status: 'complete' } : { status: 'incomplete', indent });
      }
      case 'history_request':
        return reply('history_reply', { history: this.history.find(content) });
      case 'comm_info_request':
        return reply('comm_info_reply', { comms: {} });
      case 'comm_open':
        // No widgets here: the front end is told at once that nobody listens.
        return this.sockets.publish(message, 'comm_close', { comm_id: content.comm_id, data: {} });
      case 'comm_msg':
      case 'comm_close':
        return;
      case 'interrupt_request':
        this.interrupt();
        return reply('interrupt_reply', {});
      case 'shutdown_request':
        return reply('shutdown_reply', { restart: content.restart === true });
      default: {
        const type = message.header.msg_type;
        if (type.endsWith('_request')) throw new RangeError(`This kernel does not answer ${type}.`);
      }
    }
  }

  private async execute(message: Message): Promise<void> {
    const { content } = message;
    const code = String(content.code);
    const silent = content.silent === true;
    const store = !silent && content.store_history !== false;
    if (store) this.count++;
    const count = this.count;
    if (store) this.history.add(count, code);
    if (!silent) this.sockets.publish(message, 'execute_input', { code, execution_count: count });
    await this.engine.ready;
    const answer = await this.engine
      .execute({ code, label: `cell [${count}]` }, (output) => {
        if (!silent) this.publishOutput(message, output, count);
      })
      .catch((error: unknown) => {
        if (!(error instanceof EngineGone)) throw error;
        return { status: 'error' as const, ename: 'KernelEnded', evalue: error.message, traceback: [`\u001b[31mKernelEnded\u001b[39m: ${error.message}`] };
      });
    if (answer.status === 'ok') {
      return this.sockets.reply('shell', message, 'execute_reply', {
        status: 'ok',
        execution_count: count,
        payload: [],
        user_expressions: userExpressions(content.user_expressions),
      });
    }
    const { ename, evalue, traceback } = answer;
    if (ename === 'KernelEnded') this.publishOutput(message, { kind: 'error', ename, evalue: evalue ?? '', traceback: traceback ?? [] }, count);
    const stopped = content.stop_on_error === false ? [] : await this.takeCellsSentTogether();
    this.sockets.reply('shell', message, 'execute_reply', { status: 'error', execution_count: count, ename, evalue, traceback });
    for (const cell of stopped) {
      this.sockets.publish(cell, 'status', { execution_state: 'busy' });
      this.sockets.reply('shell', cell, 'execute_reply', { status: 'aborted', execution_count: this.count });
      this.sockets.publish(cell, 'status', { execution_state: 'idle' });
    }
  }

  /**
   * Cells that were sent together with a failed one are not run, since they count on it. They are taken before the failure is told, so
   * that a cell sent as an answer to it is none of them.
   */
  private async takeCellsSentTogether(): Promise<Message[]> {
    await new Promise((resolve) => setTimeout(resolve, abortWindow));
    const waiting = this.queue.splice(0);
    const isCell = ({ header }: Message) => header.msg_type === 'execute_request';
    this.queue.push(...waiting.filter((entry) => !isCell(entry)));
    return waiting.filter(isCell);
  }

  private publishOutput(parent: Message, output: CellOutput, count: number): void {
    if (output.kind === 'stream') return this.sockets.publish(parent, 'stream', { name: output.name, text: output.text });
    if (output.kind === 'error') {
      const { ename, evalue, traceback } = output;
      return this.sockets.publish(parent, 'error', { ename, evalue, traceback });
    }
    const { kind, data, metadata, displayId } = output;
    const content = { data, metadata, transient: displayId === undefined ? {} : { display_id: displayId } };
    if (kind === 'result') this.sockets.publish(parent, 'execute_result', { ...content, execution_count: count });
    else this.sockets.publish(parent, kind === 'update' ? 'update_display_data' : 'display_data', content);
  }
}

function kernelInfo(): object {
  return {
    protocol_version: protocolVersion,
    implementation: 'wedgework',
    implementation_version: libraryVersion(),
    language_info: {
      name: 'typescript',
      version: '5.0.4',
      mimetype: 'text/typescript',
      file_extension: '.ts',
      pygments_lexer: 'typescript',
      codemirror_mode: { mode: 'typescript', name: 'javascript', typescript: true },
      nbconvert_exporter: 'script',
    },
    banner: `wedgework ${libraryVersion()}: arc-lava geochemistry in TypeScript. The library is loaded as ww.`,
    help_links: [],
    debugger: false,
  };
}

/** Expressions beside a cell are no part of a compiled language's cell. */
function userExpressions(asked: unknown): object {
  if (typeof asked !== 'object' || asked === null) return {};
  const refusal = { status: 'error', ename: 'NotSupported', evalue: 'This kernel does not evaluate user_expressions.', traceback: [] };
  return Object.fromEntries(Object.keys(asked).map((name) => [name, refusal]));
}
