import { readFileSync } from 'node:fs';
import { Publisher, Reply, Router } from 'zeromq';
import { Wire, type Message } from './wire';

/** What a Jupyter connection file says. */
interface Connection {
  readonly transport: string;
  readonly ip: string;
  readonly key: string;
  readonly shell_port: number;
  readonly iopub_port: number;
  readonly stdin_port: number;
  readonly control_port: number;
  readonly hb_port: number;
}

export type Channel = 'shell' | 'control';

/** The five sockets of a kernel. Messages in come one by one to `receive`; messages out keep their order on each socket. */
export class KernelSockets {
  private readonly wire: Wire;
  private readonly closing: (() => void)[] = [];
  private readonly tails = new Map<object, Promise<unknown>>();

  private constructor(
    connection: Connection,
    private readonly routers: Readonly<Record<Channel, Router>>,
    private readonly iopub: Publisher,
  ) {
    this.wire = new Wire(connection.key);
  }

  /**
   * Opens the sockets that a connection file names.
   *
   * @param receive called for every message that can be trusted; others are dropped with a line on stderr
   */
  static async open(connectionFile: string, receive: (channel: Channel, message: Message) => void): Promise<KernelSockets> {
    const connection = JSON.parse(readFileSync(connectionFile, 'utf8')) as Connection;
    // Nothing is dropped for a slow reader, and what was said last still goes out when the kernel ends.
    const options = { linger: 1_000, sendHighWaterMark: 0, receiveHighWaterMark: 0 };
    const shell = new Router(options);
    const control = new Router(options);
    const stdin = new Router(options);
    const iopub = new Publisher({ linger: 1_000, sendHighWaterMark: 0 });
    const heartbeat = new Reply({ linger: 0 });
    const address = (port: number) => (connection.transport === 'ipc' ? `ipc://${connection.ip}-${port}` : `${connection.transport}://${connection.ip}:${port}`);
    await Promise.all([
      shell.bind(address(connection.shell_port)),
      control.bind(address(connection.control_port)),
      stdin.bind(address(connection.stdin_port)),
      iopub.bind(address(connection.iopub_port)),
      heartbeat.bind(address(connection.hb_port)),
    ]);
    const sockets = new KernelSockets(connection, { shell, control }, iopub);
    for (const socket of [shell, control, stdin, iopub, heartbeat]) sockets.closing.push(() => socket.close());
    void sockets.listen('shell', receive);
    void sockets.listen('control', receive);
    void echo(heartbeat);
    return sockets;
  }

  private async listen(channel: Channel, receive: (channel: Channel, message: Message) => void): Promise<void> {
    for await (const frames of this.routers[channel]) {
      try {
        receive(channel, this.wire.read(frames));
      } catch (error) {
        console.error((error as Error).message);
      }
    }
  }

  reply(channel: Channel, parent: Message, type: string, content: object): void {
    this.send(this.routers[channel], this.wire.write(type, content, parent, parent.identities));
  }

  publish(parent: Message | undefined, type: string, content: object, metadata: object = {}): void {
    this.send(this.iopub, this.wire.write(type, content, parent, [Buffer.from(`kernel.${type}`)], metadata));
  }

  /** A socket takes one message at a time. */
  private send(socket: Router | Publisher, frames: Buffer[]): void {
    const tail = (this.tails.get(socket) ?? Promise.resolve()).then(() => socket.send(frames)).catch(() => {});
    this.tails.set(socket, tail);
  }

  /** Closes all sockets when what was said has gone out. */
  async close(): Promise<void> {
    await Promise.all(this.tails.values());
    for (const close of this.closing) close();
  }
}

async function echo(heartbeat: Reply): Promise<void> {
  for await (const frames of heartbeat) await heartbeat.send(frames);
}
