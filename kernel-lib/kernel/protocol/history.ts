/** What was run in this kernel, for front ends that ask for it. Lives as long as the kernel. */
export class History {
  private readonly inputs: { readonly line: number; readonly code: string }[] = [];

  add(line: number, code: string): void {
    this.inputs.push({ line, code });
  }

  /** Entries for a history request, in the protocol's form: session (always 0, this one), line, input. */
  find(request: Readonly<Record<string, unknown>>): unknown[] {
    let found = [...this.inputs];
    const n = typeof request.n === 'number' ? request.n : found.length;
    if (request.hist_access_type === 'range') {
      const from = Number(request.start ?? 0);
      const to = Number(request.stop ?? Infinity);
      // Only this session is known; 0 asks for it, and earlier ones are empty.
      found = Number(request.session ?? 0) === 0 ? found.filter(({ line }) => line >= from && line < to) : [];
    } else {
      if (request.hist_access_type === 'search') {
        const pattern = wildcard(String(request.pattern ?? '*'));
        found = found.filter(({ code }) => pattern.test(code));
        if (request.unique === true) found = [...new Map(found.map((entry) => [entry.code, entry])).values()].sort((a, b) => a.line - b.line);
      }
      found = n > 0 ? found.slice(-n) : [];
    }
    return found.map(({ line, code }) => [0, line, request.output === true ? [code, null] : code]);
  }
}

/** `*` and `?` as in file names, over the whole text. */
function wildcard(pattern: string): RegExp {
  const source = pattern.replace(/[.+^${}()|[\]\\]/g, '\\$&').replaceAll('*', '[^]*').replaceAll('?', '[^]');
  return new RegExp(`^${source}$`);
}
