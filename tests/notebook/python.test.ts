import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { pictures, pythonRun } from './environment';

// Both are ordinary unittest modules, since the conformance suite is one.
it.each(['test_conformance', 'test_kernels'])('passes %s', async (module) => {
  const { status, output } = await pythonRun(['-m', 'unittest', '-v', module]);
  writeFileSync(join(pictures, `${module}.txt`), output);
  expect(output).toMatch(/Ran \d+ tests/);
  expect(status, output).toBe(0);
});
