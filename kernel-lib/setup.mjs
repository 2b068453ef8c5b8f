#!/usr/bin/env node
// Set-up for the README's two commands, with nothing but Node and npm: installs the locked packages if they are missing or older
// than the lock file, and builds kernel-lib/dist if a source is newer than the last build.
import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const room = dirname(fileURLToPath(import.meta.url));
const root = dirname(room);
const force = process.argv.includes('--force-build');

const [major, minor] = process.versions.node.split('.').map(Number);
if (major < 20 || (major === 20 && minor < 19)) {
  console.error(`wedgework needs Node 20.19 or newer; this is ${process.versions.node}. Install a current Node and run the command again.`);
  process.exit(1);
}

function run(command, args) {
  // npm is a script on Windows, so it needs a shell there.
  execFileSync(command, args, { cwd: root, stdio: ['ignore', 'inherit', 'inherit'], shell: process.platform === 'win32' });
}

const lock = createHash('sha256').update(readFileSync(join(root, 'package-lock.json'))).digest('hex');
const lockStamp = join(root, 'node_modules', '.wedgework-lock');
if (!existsSync(lockStamp) || readFileSync(lockStamp, 'utf8') !== lock) {
  console.log('Installing packages (first run, or the lock file changed) …');
  run('npm', ['ci', '--no-audit', '--no-fund', '--loglevel=error']);
  writeFileSync(lockStamp, lock);
}

function newest(folder) {
  let latest = 0;
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    if (entry.name === 'dist' || entry.name === 'node_modules') continue;
    const path = join(folder, entry.name);
    if (entry.isDirectory()) latest = Math.max(latest, newest(path));
    else if (entry.name.endsWith('.ts')) latest = Math.max(latest, statSync(path).mtimeMs);
  }
  return latest;
}

const dist = join(room, 'dist');
const buildStamp = join(dist, '.built');
const sources = Math.max(newest(room), statSync(join(root, 'tsconfig.json')).mtimeMs);
if (force || !existsSync(buildStamp) || statSync(buildStamp).mtimeMs < sources) {
  console.log('Building the library …');
  rmSync(dist, { recursive: true, force: true });
  mkdirSync(dist, { recursive: true });
  run(process.execPath, [join(root, 'node_modules', 'typescript', 'bin', 'tsc'), '-p', join(root, 'tsconfig.json')]);
  writeFileSync(buildStamp, '');
}
