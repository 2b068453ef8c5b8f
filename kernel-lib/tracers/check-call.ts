/**
 * Throws when the first argument of a public function is no suite, or its options are no object: cells of a notebook are not strictly
 * checked, and `assays` in place of `assays.suite` is easily written.
 */
export function checkCall(caller: string, suite: unknown, options: unknown): void {
  const given = suite as { columns?: unknown; suite?: unknown } | null | undefined;
  if (typeof given !== 'object' || given === null || !(given.columns instanceof Map) || !('samples' in given)) {
    const hint = typeof given === 'object' && given !== null && 'suite' in given ? ' What you gave holds one: add .suite.' : '';
    throw new TypeError(
      `${caller}: the first argument must be a Suite (from readAssays, suiteOf, …), not ${given === null ? 'null' : typeof given}.${hint}`,
    );
  }
  if (typeof options !== 'object' || options === null || Array.isArray(options)) {
    const got = options === null ? 'null' : Array.isArray(options) ? 'a list' : typeof options;
    throw new TypeError(`${caller}: options must be an object such as { group: 'volcano' }, not ${got}.`);
  }
}
