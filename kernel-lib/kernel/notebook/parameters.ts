import { cellTags, type Notebook, type NotebookCell } from './document';

/** A value that can be put into a notebook's parameters. */
export type ParameterValue = string | number | boolean | null | readonly ParameterValue[] | { readonly [name: string]: ParameterValue };

const namePattern = /^[\p{L}_$][\p{L}\p{N}_$]*$/u;
const injectedId = 'injected-parameters';

/** Names that the cell tagged `parameters` declares, in order. */
export function parameterNames(notebook: Notebook): readonly string[] {
  const names: string[] = [];
  for (const cell of notebook.cells) {
    if (!isParameters(cell)) continue;
    // Declarations at the start of a line; one declaration may hold several names. Texts are emptied: they may look like anything.
    const source = cell.source.replace(/'(?:\\.|[^'\\\n])*'|"(?:\\.|[^"\\\n])*"|`(?:\\.|[^`\\])*`/g, "''");
    for (const [, list] of source.matchAll(/^[ \t]*(?:const|let|var)\s+([^;\n]*)/gm)) {
      for (const [, name] of list.matchAll(/(?:^|,\s*)([\p{L}_$][\p{L}\p{N}_$]*)\s*(?::[^=,]*)?=/gu)) names.push(name);
    }
  }
  return names;
}

const isParameters = (cell: NotebookCell): boolean => cell.type === 'code' && cellTags(cell).includes('parameters');

/**
 * The notebook with values put in after its cell tagged `parameters`: a cell of its own, so that the file shows what was asked for.
 *
 * @throws RangeError for a notebook without such a cell, or a name that the cell does not declare
 */
export function withParameters(notebook: Notebook, values: Readonly<Record<string, ParameterValue>>): Notebook {
  // A file that is the result of an earlier run has old values in it.
  const cells = notebook.cells.filter((cell) => !cellTags(cell).includes(injectedId));
  const entries = Object.entries(values);
  if (entries.length === 0) return { ...notebook, cells };
  const at = cells.findIndex(isParameters);
  if (at < 0) throw new RangeError('This notebook takes no parameters: none of its code cells has the tag "parameters".');
  const known = parameterNames(notebook);
  for (const [name] of entries) {
    if (!namePattern.test(name) || !known.includes(name)) {
      throw new RangeError(`This notebook has no parameter "${name}". It has: ${known.join(', ') || 'none'}.`);
    }
  }
  const source = ['// Values given for this run.', ...entries.map(([name, value]) => `const ${name} = ${JSON.stringify(value)};`)].join('\n');
  const injected: NotebookCell = { type: 'code', id: injectedId, metadata: { tags: [injectedId] }, source, outputs: [], executionCount: null };
  return { ...notebook, cells: [...cells.slice(0, at + 1), injected, ...cells.slice(at + 1)] };
}

/**
 * A parameter written as `name=value` on a command line: the value is JSON where it reads as JSON (12, true, "12", ["Ba","Th"]), text
 * otherwise.
 *
 * @throws RangeError when it is not of that form
 */
export function parseSetting(text: string): [name: string, value: ParameterValue] {
  const at = text.indexOf('=');
  const name = text.slice(0, at).trim();
  if (at < 1 || !namePattern.test(name)) throw new RangeError(`--set takes name=value, not "${text}".`);
  const given = text.slice(at + 1);
  try {
    return [name, JSON.parse(given) as ParameterValue];
  } catch {
    return [name, given];
  }
}
