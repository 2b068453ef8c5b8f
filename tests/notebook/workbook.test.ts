import { execFileSync } from 'node:child_process';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { pictures, root } from './environment';

it('LibreOffice opens the workbook of a screening, reads it back as written, and prints it', () => {
  const said = execFileSync(process.execPath, [join(root, 'tests/fertility/workbook-in-libreoffice.mjs'), join(pictures, 'workbook')], { encoding: 'utf8', timeout: 300_000 });
  expect(said).toContain('verdicts read back as written');
});
