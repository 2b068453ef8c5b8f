import { spawn, type ChildProcess } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { homedir, tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Dealer, Subscriber } from 'zeromq';
import { callBefore } from '../../kernel-lib/kernel/engine/call-before';
import { lineMap } from '../../kernel-lib/kernel/engine/cell-lines';
import { StreamGate } from '../../kernel-lib/kernel/engine/stream-gate';
import { History } from '../../kernel-lib/kernel/protocol/history';
import { userKernels } from '../../kernel-lib/kernel/protocol/kernelspec';
import { charactersFromUnits, unitsFromCharacters } from '../../kernel-lib/kernel/protocol/positions';
import { symbolText } from '../../kernel-lib/kernel/protocol/symbol-text';
import { Wire, WireError, type Message } from '../../kernel-lib/kernel/protocol/wire';
import { built } from './engine';

describe('messages on the wire', () => {
  const wire = new Wire('secret');
  const frames = () => wire.write('kernel_info_request', { detail: 'ü🌋' }, undefined, [Buffer.from('client')]);

  it('come back as they were sent', () => {
    expect(wire.read(frames())).toMatchObject({ identities: [Buffer.from('client')], content: { detail: 'ü🌋' }, header: { msg_type: 'kernel_info_request', version: '5.3' } });
  });

  it('are refused when changed, signed with another key, or not whole', () => {
    const changed = frames();
    changed[6] = Buffer.from('{"detail":"other"}');
    expect(() => wire.read(changed)).toThrow('wrong signature');
    expect(() => new Wire('other').read(frames())).toThrow(WireError);
    expect(() => wire.read(frames().slice(0, 4))).toThrow(WireError);
    expect(() => wire.read([Buffer.from('x')])).toThrow(WireError);
  });

  it('need no signature where the key is empty', () => {
    const open = new Wire('');
    expect(open.read(open.write('a', {}, undefined, [])).header.msg_type).toBe('a');
  });
});

describe('history', () => {
  const history = new History();
  ['const a = 1', 'a + 1', 'a + 2', 'a + 1'].forEach((code, i) => history.add(i + 1, code));
  it.each([
    [{ hist_access_type: 'tail', n: 2 }, [[0, 3, 'a + 2'], [0, 4, 'a + 1']]],
    [{ hist_access_type: 'tail', n: 0 }, []],
    [{ hist_access_type: 'range', session: 0, start: 1, stop: 3 }, [[0, 1, 'const a = 1'], [0, 2, 'a + 1']]],
    [{ hist_access_type: 'range', session: -1, start: 1, stop: 3 }, []],
    [{ hist_access_type: 'search', pattern: 'a + ?', unique: true, n: 9 }, [[0, 3, 'a + 2'], [0, 4, 'a + 1']]],
    [{ hist_access_type: 'search', pattern: '*=*', output: true, n: 9 }, [[0, 1, ['const a = 1', null]]]],
    [{ hist_access_type: 'search', pattern: '.*', n: 9 }, []],
  ])('answers %j', (request, entries) => {
    expect(history.find(request)).toEqual(entries);
  });
});

describe('cursor places', () => {
  it('go over and back for any text', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), fc.nat(40), (text, at) => {
        const characters = Math.min(at, [...text].length);
        expect(charactersFromUnits(text, unitsFromCharacters(text, characters))).toBe(characters);
      }),
    );
  });

  it('find the function of a call', () => {
    const at = (code: string) => {
      const place = callBefore(code.replace('|', ''), code.indexOf('|'));
      return place === undefined ? undefined : code.slice(0, place + 1);
    };
    expect(at('ww.tas(suite, { group: |')).toBe('ww.tas');
    expect(at('outer(inner(1, [2, (3)]), |')).toBe('outer');
    expect(at('outer (inner(1|')).toBe('outer (inner');
    expect(at('a + b|')).toBeUndefined();
    expect(at('(1 + |')).toBeUndefined();
  });
});

describe('words about a name', () => {
  it('have signature, doc comment and tags as text and as Markdown', () => {
    const { plain, markdown } = symbolText({
      signature: 'function f(x: number): number',
      documentation: 'Doubles.',
      tags: [{ name: 'param', text: 'x any number' }, { name: 'returns', text: 'twice x' }, { name: 'example', text: 'f(2) // 4' }],
    });
    expect(plain).toBe('function f(x: number): number\n\nDoubles.\n\nx any number\nReturns: twice x\n\nExample:\nf(2) // 4');
    expect(markdown).toContain('- `x` any number\n- **Returns** twice x\n\n**Example**\n\n```typescript\nf(2) // 4\n```');
  });
});

describe('lines of a compiled cell', () => {
  it('are found through types, comments and wrapping', () => {
    const source = ['interface A {', '  x: number;', '}', 'const a: A = { x: 1 };', '', '// why', 'throw new Error(`${a.x}`);'].join('\n');
    const output = ['Object.defineProperty(exports, "__esModule", { value: true });', 'exports.a = void 0;', 'const a = { x: 1 };', 'exports.a = a;', '// why', 'throw new Error(`${a.x}`);'].join('\n');
    const map = lineMap(source, output);
    expect([3, 5, 6].map((line) => map(line, 1))).toEqual([4, 6, 7]);
    expect(map(99, 1)).toBeUndefined();
  });

  it('are the same lines where nothing was taken out', () => {
    fc.assert(
      fc.property(fc.array(fc.stringMatching(/^[a-z]{1,8}\([0-9]{1,3}\);$/), { minLength: 1, maxLength: 20 }), (lines) => {
        const text = lines.join('\n');
        const map = lineMap(text, text);
        lines.forEach((_, i) => expect(map(i + 1, 1)).toBe(i + 1));
      }),
    );
  });
});

describe('the gate for printed text', () => {
  it('loses nothing below the limit, whatever the pieces', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(fc.constantFrom('stdout' as const, 'stderr' as const), fc.string()), { maxLength: 50 }), (pieces) => {
        const sent: [string, string][] = [];
        const gate = new StreamGate((name, text) => sent.push([name, text]));
        for (const [name, text] of pieces) gate.write(name, text);
        gate.end();
        for (const wanted of ['stdout', 'stderr']) {
          const join = (list: readonly (readonly [string, string])[]) => list.filter(([name]) => name === wanted).map(([, text]) => text).join('');
          expect(join(sent)).toBe(join(pieces));
        }
      }),
    );
  });

  it('joins characters that were cut into bytes, and opens again for the next cell', () => {
    const sent: string[] = [];
    const gate = new StreamGate((_, text) => sent.push(text), 10);
    const bytes = Buffer.from('ä🌋');
    for (const byte of bytes) gate.write('stdout', Uint8Array.of(byte));
    gate.end();
    expect(sent.join('')).toBe('ä🌋');
    sent.length = 0;
    gate.write('stdout', 'x'.repeat(25));
    gate.end();
    expect(sent).toEqual(['x'.repeat(10), expect.stringContaining('15 more characters')]);
    gate.write('stdout', 'next');
    gate.end();
    expect(sent.at(-1)).toBe('next');
  });
});

describe('the folder of kernels', () => {
  it('is where Jupyter looks on each system', () => {
    expect(userKernels({}, 'linux')).toBe(join(homedir(), '.local/share/jupyter/kernels'));
    expect(userKernels({ XDG_DATA_HOME: '/data' }, 'linux')).toBe('/data/jupyter/kernels');
    expect(userKernels({}, 'darwin')).toBe(join(homedir(), 'Library/Jupyter/kernels'));
    expect(userKernels({ JUPYTER_DATA_DIR: '/mine' }, 'darwin')).toBe('/mine/kernels');
  });
});

describe('a kernel over its sockets', () => {
  const folder = mkdtempSync(join(tmpdir(), 'wedgework-kernel-'));
  const key = randomUUID();
  const wire = new Wire(key);
  const shell = new Dealer({ linger: 0 });
  const control = new Dealer({ linger: 0 });
  const iopub = new Subscriber({ linger: 0 });
  const published: Message[] = [];
  let kernel: ChildProcess;
  let status: Promise<number | null>;
  let said = '';

  beforeAll(async () => {
    // Sockets in the folder rather than ports, which another program might take first.
    const ip = join(folder, 'kernel');
    const file = join(folder, 'connection.json');
    writeFileSync(file, JSON.stringify({ transport: 'ipc', ip, key, signature_scheme: 'hmac-sha256', shell_port: 1, iopub_port: 2, stdin_port: 3, control_port: 4, hb_port: 5 }));
    kernel = spawn(process.execPath, [join(built, 'kernel/cli.js'), 'kernel', 'start', '--connection-file', file], { cwd: folder, stdio: ['ignore', 'ignore', 'pipe'] });
    status = new Promise((resolve) => kernel.once('exit', resolve));
    kernel.stderr!.on('data', (text) => (said += text));
    shell.connect(`ipc://${ip}-1`);
    control.connect(`ipc://${ip}-4`);
    iopub.connect(`ipc://${ip}-2`);
    iopub.subscribe();
    void (async () => {
      for await (const frames of iopub) published.push(wire.read(frames));
    })();
  });
  afterAll(() => {
    for (const socket of [shell, control, iopub]) socket.close();
    kernel.kill('SIGKILL');
    rmSync(folder, { recursive: true });
  });

  const ask = async (socket: Dealer, type: string, content: object) => {
    await socket.send(wire.write(type, content, undefined, []));
    const ended = status.then((code) => Promise.reject(new Error(`The kernel ended with ${code}: ${said}`)));
    return wire.read(await Promise.race([socket.receive(), ended]));
  };
  const outputsOf = async (reply: Message) => {
    const mine = () => published.filter(({ parent }) => parent.msg_id === reply.parent.msg_id);
    while (!mine().some(({ content }) => content.execution_state === 'idle')) await new Promise((resolve) => setTimeout(resolve, 10));
    return mine().map(({ header, content }) => [header.msg_type, content] as const);
  };

  it('says what it is before its cells can run', async () => {
    const { content } = await ask(shell, 'kernel_info_request', {});
    expect(content).toMatchObject({ status: 'ok', protocol_version: '5.3', implementation: 'wedgework', language_info: { name: 'typescript', file_extension: '.ts' } });
    // A subscriber that connected before the kernel listened hears nothing for a moment: clients ask until they hear.
    while (published.length === 0) await ask(shell, 'kernel_info_request', {}).then(() => new Promise((resolve) => setTimeout(resolve, 20)));
  });

  it('drops a message that it cannot trust, and goes on', async () => {
    await shell.send(new Wire('stranger').write('execute_request', { code: 'globalThis.touched = true' }, undefined, []));
    const reply = await ask(shell, 'execute_request', { code: 'String((globalThis as any).touched)' });
    expect(reply.content).toMatchObject({ status: 'ok', execution_count: 1 });
    const outputs = await outputsOf(reply);
    expect(outputs.map(([type]) => type)).toEqual(['status', 'execute_input', 'execute_result', 'status']);
    expect(outputs[2][1]).toMatchObject({ execution_count: 1, data: { 'text/plain': "'undefined'" } });
  });

  it('answers the control channel while a cell is in an endless loop, and interrupts it by message', async () => {
    const looping = ask(shell, 'execute_request', { code: 'while (true) {}' });
    await new Promise((resolve) => setTimeout(resolve, 500));
    expect((await ask(control, 'kernel_info_request', {})).content.status).toBe('ok');
    const asked = performance.now();
    expect((await ask(control, 'interrupt_request', {})).content.status).toBe('ok');
    expect((await looping).content).toMatchObject({ status: 'error', ename: 'Interrupted' });
    expect(performance.now() - asked).toBeLessThan(1000);
  });

  it('says that nobody listens to a comm', async () => {
    await shell.send(wire.write('comm_open', { comm_id: 'c1', target_name: 'x', data: {} }, undefined, []));
    while (!published.some(({ header }) => header.msg_type === 'comm_close')) await new Promise((resolve) => setTimeout(resolve, 10));
    expect((await ask(shell, 'comm_info_request', {})).content).toMatchObject({ status: 'ok', comms: {} });
  });

  it('ends when asked, with its engine', async () => {
    const { content } = await ask(control, 'shutdown_request', { restart: false });
    expect(content).toEqual({ status: 'ok', restart: false });
    expect(await status, said).toBe(0);
  });
});
