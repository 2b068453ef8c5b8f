import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { describe, expect, it } from 'vitest';

const library = join(__dirname, '../../kernel-lib');

/** Rooms from the ground up; a room may import the ones before it. Rooms on one line know nothing of each other. */
const floors = [['chemistry', 'display'], ['tables'], ['suite'], ['recast'], ['assay'], ['classify'], ['tracers'], ['models'], ['fertility'], ['margin'], ['diagrams'], ['kernel'], ['index.ts']];
const floorOf = new Map(floors.flatMap((rooms, floor) => rooms.map((room): [string, number] => [room, floor])));

function sources(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    if (entry.name === 'dist' || entry.name === 'node_modules' || entry.name === 'assets') return [];
    const path = join(folder, entry.name);
    return entry.isDirectory() ? sources(path) : entry.name.endsWith('.ts') ? [path] : [];
  });
}

/** Every relative import of the library: who imports what, as paths inside kernel-lib/. */
const imports = sources(library).flatMap((file) =>
  [...readFileSync(file, 'utf8').matchAll(/(?:from|import|require\()\s*['"](\.[^'"]*)['"]/g)].map((match) => ({
    from: relative(library, file),
    to: relative(library, resolve(dirname(file), match[1])),
  })),
);
const roomOf = (path: string) => path.split('/')[0];

describe('the house', () => {
  it('has every room on a floor', () => {
    for (const { from } of imports) expect(floorOf.has(roomOf(from)), `${from} is in no known room`).toBe(true);
  });

  it('lets no import point up', () => {
    const upward = imports.filter(({ from, to }) => roomOf(from) !== roomOf(to) && to !== '' && floorOf.get(roomOf(to))! >= floorOf.get(roomOf(from))!);
    expect(upward.map(({ from, to }) => `${from} imports ${to}`)).toEqual([]);
  });

  it('lets other rooms in by the door only', () => {
    const inside = imports.filter(({ from, to }) => roomOf(from) !== roomOf(to) && to.includes('/'));
    expect(inside.map(({ from, to }) => `${from} imports ${to}`)).toEqual([]);
  });

  it('loads the data-frame library only where frames are handed out', () => {
    const users = sources(library).filter((file) => /require\('danfojs-node'\)|from 'danfojs-node'/.test(readFileSync(file, 'utf8')));
    expect(users.map((file) => relative(library, file))).toEqual(['suite/frame.ts']);
  });
});
