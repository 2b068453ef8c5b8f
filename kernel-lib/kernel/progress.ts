import { randomBytes } from 'node:crypto';
import type { DisplayOutput } from './output';
import { sessionLink } from './session-link';
import { stockTslabDisplay } from './stock-tslab';

/** The private type by which the runner knows a progress line. */
export const progressType = 'application/vnd.wedgework.progress+json';

/** What long work takes: spread it into the options of any function that has them. */
export interface TaskProgress {
  /** Aborts when the cell is interrupted. */
  readonly signal: AbortSignal;
  /** Tells how far the work is: so many of so many. */
  readonly progress: (done: number, total: number) => void;
}

const shortestWait = 200;

/** Seconds as a reader says them: 8 s, 2 min 05 s, 1 h 10 min. */
export function spanText(seconds: number): string {
  if (seconds < 60) return `${seconds < 10 ? seconds.toFixed(1) : Math.round(seconds)} s`;
  const whole = Math.round(seconds);
  if (whole < 3600) return `${Math.floor(whole / 60)} min ${String(whole % 60).padStart(2, '0')} s`;
  return `${Math.floor(whole / 3600)} h ${String(Math.floor((whole % 3600) / 60)).padStart(2, '0')} min`;
}

/**
 * One progress line for a long task (percent, time gone, time left), which updates in place in every notebook front end and in the
 * terminal, and the signal by which interrupting the cell stops the task. Spread it into the options of a function that takes
 * `{ signal, progress }`.
 *
 * @param label what is being done, e.g. `Bootstrap of the mixing fit`
 * @param options `quiet`: no line, only the signal (default: as the runner's `--quiet` says)
 * @returns `{ signal, progress }`
 * @throws TypeError when the label is not a text
 * @example const { signal, progress } = ww.progress('Counting'); for (let i = 1; i <= 10 && !signal.aborted; i++) progress(i, 10);
 */
export function progress(label: string, options: { readonly quiet?: boolean } = {}): TaskProgress {
  if (typeof label !== 'string' || label.trim() === '') {
    throw new TypeError(`progress: the label must be a text that says what is being done, not ${JSON.stringify(label)}.`);
  }
  const link = sessionLink();
  const signal = link?.signal() ?? new AbortController().signal;
  if (options.quiet ?? link?.quiet ?? false) return { signal, progress: () => {} };
  const write = lineWriter();
  const start = performance.now();
  let last = -Infinity;
  let finished = false;
  return {
    signal,
    progress: (done, total) => {
      if (finished || !(total > 0)) return;
      const now = performance.now();
      const end = done >= total;
      if (!end && now - last < shortestWait) return;
      last = now;
      finished = end;
      const elapsed = (now - start) / 1000;
      const share = Math.min(1, Math.max(0, done / total));
      const left = share > 0 ? (elapsed * (1 - share)) / share : NaN;
      const rest = Number.isNaN(left) ? '' : `, about ${spanText(left)} left`;
      const text = end ? `${label}: done in ${spanText(elapsed)}` : `${label}: ${Math.floor(share * 100)} %, ${spanText(elapsed)} gone${rest}`;
      write({ 'text/plain': text, [progressType]: { label, done, total, elapsed, left: Number.isNaN(left) ? null : left, text } });
    },
  };
}

/** Writes a line again and again in its place, in whatever runs this code. */
function lineWriter(): (data: DisplayOutput['data']) => void {
  const link = sessionLink();
  const displayId = randomBytes(8).toString('hex');
  const stock = link === undefined ? stockTslabDisplay() : undefined;
  let shown = false;
  return (data) => {
    if (link !== undefined) link.show({ kind: shown ? 'update' : 'display', data, metadata: {}, displayId });
    else if (stock !== undefined) stock({ data, metadata: {}, transient: { display_id: displayId } }, shown);
    else if (process.stderr.isTTY) process.stderr.write(`\r\u001b[K${String(data['text/plain'])}`);
    shown = true;
  };
}
