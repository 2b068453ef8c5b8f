import { diffArrays } from 'diff';

interface Token {
  readonly text: string;
  readonly line: number;
  readonly column: number;
}

const tokenPattern = /[\p{L}_$][\p{L}\p{N}_$]*|\d[\w.]*|"(?:\\.|[^"\\\n])*"|'(?:\\.|[^'\\\n])*'|[^\s\w]/gu;
/** Past this many differing tokens (or this much text) a line is not worth the wait. */
const mostEdits = 4_000;
const mostText = 200_000;

function tokens(text: string): Token[] {
  const found: Token[] = [];
  text.split('\n').forEach((content, i) => {
    for (const match of content.matchAll(tokenPattern)) found.push({ text: match[0], line: i + 1, column: match.index + 1 });
  });
  return found;
}

/**
 * Maps places in a compiled cell back to the user's own text. The compiler that reads cells gives no source map, but what it writes is
 * the cell's text less its types plus some wrapping, so aligning the two token by token finds the line.
 *
 * @param source the cell as written
 * @param output what the compiler made of it
 * @returns a function from line and column (from 1) in the output to the line in the source, undefined where it cannot be told
 */
export function lineMap(source: string, output: string): (line: number, column: number) => number | undefined {
  if (source.length + output.length > mostText) return () => undefined;
  const from = tokens(source);
  const to = tokens(output);
  const changes = diffArrays(from.map(({ text }) => text), to.map(({ text }) => text), { maxEditLength: mostEdits });
  if (changes === undefined) return () => undefined;
  const origin = new Array<Token | undefined>(to.length);
  let i = 0;
  let j = 0;
  for (const { count, added, removed } of changes) {
    if (added) j += count;
    else if (removed) i += count;
    else for (let k = 0; k < count; k++) origin[j++] = from[i++];
  }
  return (line, column) => {
    // The token at the place, then the next ones on its line (the place may be inside wrapping), then the ones before it.
    const start = to.findIndex((token) => token.line > line || (token.line === line && token.column + token.text.length > column));
    if (start < 0) return undefined;
    for (let k = start; k < to.length && to[k].line === line; k++) if (origin[k] !== undefined) return origin[k]!.line;
    for (let k = start - 1; k >= 0 && to[k].line === line; k--) if (origin[k] !== undefined) return origin[k]!.line;
    return undefined;
  };
}
