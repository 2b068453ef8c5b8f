import { relative } from 'node:path';
import { tableText } from '../../display';
import { verifyRun, type Verification } from '../record/verify';
import { interruptKey } from './run';
import { TerminalProgress } from './terminal';

/** Exit status for each verdict. */
const verdictStatus: Readonly<Record<Verification['verdict'], number>> = { identical: 0, same: 0, different: 1, 'not comparable': 2 };

/** `wedgework verify`: runs a notebook again and says what came out otherwise. @returns the exit status */
export async function verifyCommand(notebook: string, options: { readonly timeout?: string; readonly quiet?: boolean; readonly tolerance?: string }): Promise<number> {
  const progress = new TerminalProgress(process.stderr, options.quiet ?? false);
  const { signal, release } = interruptKey();
  try {
    if (options.quiet !== true) progress.line(`Running ${relative(process.cwd(), notebook) || notebook} again`);
    const result = await verifyRun(notebook, {
      timeout: options.timeout === undefined ? undefined : Number(options.timeout),
      tolerance: options.tolerance === undefined ? undefined : Number(options.tolerance),
      onProgress: progress.tell,
      signal,
    });
    progress.end();
    console.log(verdictText(result));
    return verdictStatus[result.verdict];
  } finally {
    progress.end();
    release();
  }
}

function verdictText({ verdict, because, values, changes, differences }: Verification): string {
  const lines = [
    verdict === 'not comparable' ? `Not comparable: ${because}.` : `${verdict[0].toUpperCase()}${verdict.slice(1)}: ${values} values of tables and figures compared.`,
    ...changes.map(({ what, text }) => `  ${what} changed: ${text}`),
  ];
  if (differences.length > 0) {
    const rows = differences.map((each) => [
      `cell ${each.cell}, ${each.kind} ${each.output}`, each.place, each.before, each.after, each.relative === undefined ? '' : `${Number((100 * each.relative).toPrecision(3))} %`,
    ]);
    lines.push('', tableText({ columns: ['output', 'place', 'was', 'is now', 'apart by'], rows }));
  }
  return lines.join('\n');
}
