import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { inflateSync } from 'node:zlib';
import { afterAll, describe, expect, it } from 'vitest';
import { column, diagrams, suiteOf, writeAssays, writeTable } from 'wedgework';

const folder = mkdtempSync(join(tmpdir(), 'wedgework-carried-'));
afterAll(() => rmSync(folder, { recursive: true }));

const suite = suiteOf({ columns: [column({ symbol: 'Ba', values: [100, 200] }), column({ symbol: 'Th', values: [1, 3] })], labels: { sample: ['<a>', 'b'] } }).where({ Ba: { from: 50 } });
const diagram = diagrams.xy(suite, 'Th', 'Ba');
const path = (name: string) => join(folder, name);
const steps = (text: string) => (JSON.parse(text) as { steps: { what: string }[] }).steps.map(({ what }) => what);
const unescaped = (html: string) => html.replaceAll('&quot;', '"').replaceAll('&#39;', "'").replaceAll('&lt;', '<').replaceAll('&gt;', '>').replaceAll('&amp;', '&');

describe('every exported file carries its lineage', () => {
  it('SVG in its metadata', async () => {
    await diagrams.saveSvg(diagram, path('a.svg'));
    const [, text] = /<metadata id="wedgework-lineage">([\s\S]*?)<\/metadata>/.exec(readFileSync(path('a.svg'), 'utf8'))!;
    expect(steps(unescaped(text))).toEqual(diagram.lineage.map(({ what }) => what));
  });

  it('HTML in a meta element', async () => {
    await diagrams.saveHtml(diagram, path('a.html'));
    const [, text] = /<meta name="wedgework-lineage" content="([^"]*)">/.exec(readFileSync(path('a.html'), 'utf8'))!;
    expect(steps(unescaped(text))).toContain('where');
  });

  it('PNG in an iTXt chunk that a reader of the format finds (PNG specification, 11.3.3.4), and the picture stays whole', async () => {
    await diagrams.savePng(diagram, path('a.png'), { scale: 1 });
    const png = readFileSync(path('a.png'));
    const chunks = new Map<string, Buffer[]>();
    for (let at = 8; at < png.length; ) {
      const length = png.readUInt32BE(at);
      const type = png.toString('latin1', at + 4, at + 8);
      chunks.set(type, [...(chunks.get(type) ?? []), png.subarray(at + 8, at + 8 + length)]);
      at += 12 + length;
    }
    const [text] = chunks.get('iTXt')!;
    expect(text.toString('latin1', 0, 17)).toBe('wedgework-lineage'.slice(0, 17));
    expect(steps(text.subarray(text.lastIndexOf(0) + 1).toString('utf8'))).toContain('diagrams.xy');
    expect([...chunks.keys()].at(-1)).toBe('IEND');
    expect(inflateSync(Buffer.concat(chunks.get('IDAT')!)).length).toBeGreaterThan(1000);
  });

  it('PDF in its keywords', async () => {
    await diagrams.savePdf(diagram, path('a.pdf'));
    expect(readFileSync(path('a.pdf')).includes('/Keywords')).toBe(true);
  });

  it('sheets in a file beside them', async () => {
    await writeAssays(suite, path('a.csv'));
    await writeTable(path('b.csv'), [suite.column('Ba')], { sample: suite.samples }, [suite]);
    for (const name of ['a.csv', 'b.csv']) expect(steps(readFileSync(path(`${name}.lineage.json`), 'utf8'))).toEqual(['where']);
  });
});
