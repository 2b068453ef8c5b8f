const opening: Readonly<Record<string, string>> = { ')': '(', ']': '[', '}': '{' };

/**
 * The place of the function name whose call a position stands in.
 *
 * @param code text of a cell
 * @param position where the cursor is
 * @returns the place of the last letter of the name, undefined outside any call
 */
export function callBefore(code: string, position: number): number | undefined {
  const open: string[] = [];
  for (let i = position - 1; i >= 0; i--) {
    const character = code[i];
    if (character in opening) open.push(opening[character]);
    else if (character === open[open.length - 1]) open.pop();
    else if (character === '(' && open.length === 0) {
      const name = /[\p{L}\p{N}_$]\s*$/u.exec(code.slice(0, i));
      if (name !== null) return name.index;
    }
  }
  return undefined;
}
