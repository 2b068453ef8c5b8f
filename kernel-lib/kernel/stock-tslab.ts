type WriteDisplay = (content: { data: object; metadata: object; transient?: { display_id?: string } }, update: boolean) => void;

/**
 * The display of a stock tslab kernel, when this code runs in one. tslab gives no public way to show several types at once, so its
 * loaded module is looked up where Node keeps it.
 */
export function stockTslabDisplay(): WriteDisplay | undefined {
  if (!('__tslab__' in globalThis)) return undefined;
  for (const [path, loaded] of Object.entries(require.cache)) {
    if (!/[\\/]tslab[\\/]dist[\\/]jupyter\.js$/.test(path)) continue;
    const write = (loaded?.exports as { lastWriteDisplayData?: unknown }).lastWriteDisplayData;
    if (typeof write === 'function') return write as WriteDisplay;
  }
  return undefined;
}
