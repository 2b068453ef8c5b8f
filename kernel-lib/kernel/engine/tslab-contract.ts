/**
 * The one file that touches tslab's private modules. tslab has had no release since 2024 and is pinned exactly; tests/kernel holds the
 * contract that this file relies on. Loading it loads the compiler (about a second), so only the engine's own process imports it.
 */
import { createRequire } from 'node:module';
import { dirname, join, sep } from 'node:path';

interface Diagnostic {
  readonly start: { readonly line: number; readonly character: number };
  readonly messageText: string;
}

interface Conversion {
  output?: string;
  declOutput?: string;
  diagnostics: Diagnostic[];
  hasToplevelAwait?: boolean;
  lastExpressionVar?: string;
}

type TextParts = readonly { readonly text: string }[];

interface QuickInfo {
  readonly displayParts?: TextParts;
  readonly documentation?: TextParts;
  readonly tags?: readonly { readonly name: string; readonly text?: TextParts }[];
}

interface Converter {
  close(): void;
  convert(previous: string, source: string): Conversion;
  inspect(previous: string, source: string, position: number): QuickInfo | undefined;
  complete(previous: string, source: string, position: number): Completion & { original?: { entries?: readonly { name: string; kind: string }[] } };
  addModule(name: string, source: string, meta: unknown): Diagnostic[];
}

interface Completion {
  readonly start: number;
  readonly end: number;
  readonly candidates: readonly string[];
}

interface Executor {
  execute(source: string): Promise<boolean>;
  inspect(source: string, position: number): QuickInfo | undefined;
  complete(source: string, position: number): ReturnType<Converter['complete']>;
  interrupt(): void;
  close(): void;
}

/* eslint-disable @typescript-eslint/no-require-imports */
const tslabConverter = require('tslab/dist/converter') as {
  createConverter(options: { isJS: boolean; isBrowser: boolean }): Converter;
  isCompleteCode(source: string): { completed: boolean; indent?: string };
};
const tslabExecutor = require('tslab/dist/executor') as {
  createExecutor(
    folder: string,
    converters: { node: Converter; browser: Converter; close(): void },
    console: { log(value: unknown): void; error(...values: unknown[]): void },
  ): Executor;
};
const tslabJupyter = require('tslab/dist/jupyter') as { lastWriteDisplayData: unknown };

interface CompilerSystem {
  fileExists(path: string): boolean;
  directoryExists(path: string): boolean;
  readFile(path: string, encoding?: string): string | undefined;
  realpath?(path: string): string;
  watchFile?(path: string, callback: (path: string, event: number) => void, interval?: number): { close(): void };
}
interface SyntaxNode {
  readonly kind: number;
  readonly name?: SyntaxNode;
  readonly end: number;
  readonly text?: string;
}
interface Compiler {
  readonly sys: CompilerSystem;
  readonly version: string;
  readonly SyntaxKind: { readonly ShorthandPropertyAssignment: number };
  readonly ScriptTarget: { readonly Latest: number };
  createSourceFile(name: string, text: string, target: number, parents: boolean): SyntaxNode;
  forEachChild(node: SyntaxNode, visit: (child: SyntaxNode) => void): void;
}
const compiler = createRequire(require.resolve('tslab/dist/converter'))('@tslab/typescript-for-tslab') as Compiler;
/* eslint-enable @typescript-eslint/no-require-imports */

/** Version of the compiler that reads the cells. */
export const cellCompilerVersion = compiler.version;

/** What the executor tells while a cell runs. */
export interface ExecutorEvents {
  /** The cell was compiled: what will run, under which name its stack frames stand. */
  compiled(output: string): { readonly scriptName: string } | undefined;
  /** The value of the cell's last expression; not called for undefined and null. */
  value(value: unknown): void;
  /** A fault found by the compiler; line and column count from 1, in the cell's own text. */
  diagnostic(fault: CompilerFault): void;
  /** What the cell threw. */
  thrown(error: unknown): void;
}

export interface CompilerFault {
  readonly line: number;
  readonly column: number;
  readonly message: string;
}

/** A cell executor over tslab: state lives as long as the process. */
export interface CellExecutor {
  /** Resolves to true when the cell ran to its end. Never settles when its run is terminated from another thread. */
  execute(source: string): Promise<boolean>;
  complete(source: string, position: number): { start: number; end: number; matches: { text: string; kind: string }[] };
  inspect(source: string, position: number): SymbolInfo | undefined;
  isComplete(source: string): { complete: boolean; indent: string };
  /** Rejects the await that the running cell hangs in. */
  interrupt(): void;
  close(): void;
}

/** What the compiler knows of a name in a cell. */
export interface SymbolInfo {
  readonly signature: string;
  readonly documentation: string;
  readonly tags: readonly { readonly name: string; readonly text: string }[];
}

const joinParts = (parts: TextParts | undefined): string => (parts ?? []).map(({ text }) => text).join('');

/** Packages that a cell can import by name wherever its notebook lies, through the library's own installation. */
const sharedPackages = ['wedgework', 'danfojs-node', 'tslab'];

/**
 * Opens the process's only executor. The current folder becomes `folder`, because tslab resolves everything from there.
 *
 * @param folder the notebook's folder
 * @param libraryRequire resolves modules as the library's own files do
 */
export function openExecutor(folder: string, libraryRequire: NodeJS.Require, events: ExecutorEvents): CellExecutor {
  process.chdir(folder);
  shareLibraryWithCompiler(process.cwd(), libraryRequire);
  const converter = tslabConverter.createConverter({ isJS: false, isBrowser: false });
  const announced: Converter = {
    ...converter,
    convert(previous, source) {
      const spelledOut = spellOutShorthand(source);
      let conversion = converter.convert(previous, spelledOut);
      // Faults are told at their place in the cell as written.
      if (conversion.diagnostics.length > 0 && spelledOut !== source) conversion = converter.convert(previous, source);
      if (conversion.output) {
        const name = events.compiled(conversion.output)?.scriptName;
        // The engine names the script in stack frames by this comment; tslab itself gives all cells the same name.
        if (name !== undefined) conversion.output += `\n//# sourceURL=${name}`;
      }
      return conversion;
    },
  };
  const executor = tslabExecutor.createExecutor(process.cwd(), { node: announced, browser: announced, close: () => converter.close() }, {
    log: (value) => events.value(value),
    error: (...values) => {
      // Diagnostics come as a format with file, line, column and message; a thrown value comes alone.
      if (values.length === 5 && typeof values[0] === 'string' && values[0].startsWith('%s%d:%d')) {
        events.diagnostic({ line: Number(values[2]), column: Number(values[3]), message: `${String(values[1])}${String(values[4])}` });
      } else events.thrown(values[0]);
    },
  });
  shareLibraryWithCells(libraryRequire);
  return {
    execute: (source) => executor.execute(source),
    complete: (source, position) => {
      const { start, end, candidates, original } = executor.complete(source, position);
      const kinds = new Map((original?.entries ?? []).map((entry) => [entry.name, entry.kind]));
      return { start, end, matches: candidates.map((text) => ({ text, kind: kinds.get(text) ?? '' })) };
    },
    inspect: (source, position) => {
      const info = executor.inspect(source, position);
      if (info === undefined) return undefined;
      const tags = (info.tags ?? []).map(({ name, text }) => ({ name, text: joinParts(text) }));
      return { signature: joinParts(info.displayParts), documentation: joinParts(info.documentation), tags };
    },
    isComplete: (source) => {
      const { completed, indent } = tslabConverter.isCompleteCode(source);
      return { complete: completed, indent: indent ?? '' };
    },
    interrupt: () => executor.interrupt(),
    close: () => executor.close(),
  };
}

/**
 * `{ name }` written as `{ name: name }`: tslab turns a name of an earlier cell into `exports.name`, which the short form has no place for.
 */
function spellOutShorthand(source: string): string {
  if (!source.includes('{')) return source;
  const places: { readonly at: number; readonly name: string }[] = [];
  const visit = (node: SyntaxNode): void => {
    const { name } = node;
    if (node.kind === compiler.SyntaxKind.ShorthandPropertyAssignment && name?.text !== undefined) places.push({ at: name.end, name: name.text });
    compiler.forEachChild(node, visit);
  };
  visit(compiler.createSourceFile('cell.ts', source, compiler.ScriptTarget.Latest, false));
  return places.reduceRight((text, { at, name }) => `${text.slice(0, at)}: ${name}${text.slice(at)}`, source);
}

/** What `tslab.display` of a cell calls; the same shape as the content of a Jupyter display message. */
export type WriteDisplay = (
  content: { data: Record<string, unknown>; metadata: Record<string, unknown>; transient?: { display_id?: string } },
  update?: boolean,
) => void;

/** Sends what a cell shows through tslab's own display functions the engine's way. */
export function connectTslabDisplay(write: WriteDisplay): void {
  tslabJupyter.lastWriteDisplayData = write;
}

/** Lets the compiler find the shared packages from a folder that has no node_modules of its own with them in it. */
function shareLibraryWithCompiler(folder: string, libraryRequire: NodeJS.Require): void {
  const local = createRequire(join(folder, 'cell.js'));
  const homes = new Map<string, string>();
  for (const name of sharedPackages) {
    try {
      local.resolve(`${name}/package.json`);
    } catch {
      try {
        homes.set(slashes(join(folder, 'node_modules', name)), slashes(dirname(libraryRequire.resolve(`${name}/package.json`))));
      } catch {
        // Not installed at all: the cell that imports it gets the compiler's own message.
      }
    }
  }
  const { sys } = compiler;
  const { watchFile } = sys;
  // Only files a user edits are watched; the watch of every declaration file in node_modules would poll the disk for nothing.
  if (watchFile !== undefined) {
    const own = slashes(join(__dirname, '..', '..'));
    const still = (path: string) => path.includes('/node_modules/') || path.startsWith(own);
    sys.watchFile = (path, callback, interval) => (still(path) ? { close: () => {} } : watchFile(path, callback, interval));
  }
  if (homes.size === 0) return;
  const moved = (path: string): string => {
    for (const [from, to] of homes) if (path === from || path.startsWith(`${from}/`)) return to + path.slice(from.length);
    return path;
  };
  const { fileExists, directoryExists, readFile, realpath } = sys;
  sys.fileExists = (path) => fileExists(moved(path));
  sys.directoryExists = (path) => directoryExists(moved(path));
  sys.readFile = (path, encoding) => readFile(moved(path), encoding);
  if (realpath !== undefined) sys.realpath = (path) => realpath(moved(path));
}

/** Lets `require` in a cell fall back to the library's installation, for any package that the notebook's folder does not have. */
function shareLibraryWithCells(libraryRequire: NodeJS.Require): void {
  const shared = (globalThis as { __tslab__?: { require: NodeJS.Require } }).__tslab__;
  if (shared === undefined) throw new Error('tslab did not leave its require in globalThis.__tslab__; this needs tslab 1.0.22.');
  const local = shared.require;
  shared.require = new Proxy(local, {
    apply: (target, self, [id, ...rest]: [string]) => {
      try {
        return Reflect.apply(target, self, [id, ...rest]);
      } catch (error) {
        const { code, message } = error as NodeJS.ErrnoException;
        // Only where the very name is missing; a fault inside a found module is that module's own.
        if (code !== 'MODULE_NOT_FOUND' || id.startsWith('.') || !message.includes(`'${id}'`)) throw error;
        let path: string;
        try {
          path = libraryRequire.resolve(id);
        } catch {
          throw error;
        }
        return libraryRequire(path);
      }
    },
  });
}

const slashes = (path: string): string => (sep === '\\' ? path.replaceAll('\\', '/') : path);
