import { closeSync, openSync, truncateSync, writeFileSync, writeSync } from 'node:fs';
import { deflateRawSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { AssayError, readAssays, tableHtml, type TableView } from 'wedgework';
import { cells, readText, temporary } from './helpers';

/** A zip file by hand, so that it can lie: `claimed` sizes go into its directory. */
function zip(parts: readonly { name: string; content: Buffer; claimed?: number; flags?: number }[]): Buffer {
  const locals: Buffer[] = [];
  const directory: Buffer[] = [];
  let offset = 0;
  for (const { name, content, claimed = content.length, flags = 0 } of parts) {
    const packed = deflateRawSync(content, { level: 9 });
    const head = Buffer.alloc(30);
    head.writeUInt32LE(0x04034b50, 0);
    head.writeUInt16LE(8, 8);
    head.writeUInt32LE(packed.length, 18);
    head.writeUInt32LE(claimed, 22);
    head.writeUInt16LE(name.length, 26);
    locals.push(head, Buffer.from(name), packed);
    const entry = Buffer.alloc(46);
    entry.writeUInt32LE(0x02014b50, 0);
    entry.writeUInt16LE(flags, 8);
    entry.writeUInt16LE(8, 10);
    entry.writeUInt32LE(packed.length, 20);
    entry.writeUInt32LE(claimed, 24);
    entry.writeUInt16LE(name.length, 28);
    entry.writeUInt32LE(offset, 42);
    directory.push(entry, Buffer.from(name));
    offset += 30 + name.length + packed.length;
  }
  const size = directory.reduce((sum, part) => sum + part.length, 0);
  const end = Buffer.alloc(22);
  end.writeUInt32LE(0x06054b50, 0);
  end.writeUInt16LE(parts.length, 8);
  end.writeUInt16LE(parts.length, 10);
  end.writeUInt32LE(size, 12);
  end.writeUInt32LE(offset, 16);
  return Buffer.concat([...locals, ...directory, end]);
}

const types = { name: '[Content_Types].xml', content: Buffer.from('<Types/>') };
const book = (sheets = '<sheet name="Data" sheetId="1" r:id="rId1"/>') => ({
  name: 'xl/workbook.xml',
  content: Buffer.from(`<workbook xmlns:r="r"><sheets>${sheets}</sheets></workbook>`),
});
const links = {
  name: 'xl/_rels/workbook.xml.rels',
  content: Buffer.from('<Relationships><Relationship Id="rId1" Target="worksheets/sheet1.xml"/></Relationships>'),
};
const sheet = (rows: string) => ({ name: 'xl/worksheets/sheet1.xml', content: Buffer.from(`<worksheet><sheetData>${rows}</sheetData></worksheet>`) });
const inline = (text: string) => `<c t="inlineStr"><is><t>${text}</t></is></c>`;
const heads = `<row r="1">${inline('Sample')}${inline('SiO2 (wt%)')}${inline('Ba (ppm)')}</row>`;

async function refused(content: Buffer, name: string, message: RegExp): Promise<void> {
  const before = process.memoryUsage().rss;
  const problem = await readText(content, name).then(
    () => undefined,
    (error: unknown) => error,
  );
  expect(problem).toBeInstanceOf(AssayError);
  expect((problem as Error).message).toMatch(message);
  expect((process.memoryUsage().rss - before) / 1e6).toBeLessThan(150);
}

describe('workbooks made to harm', () => {
  it('refuses a zip bomb by the sizes it claims, and by the sizes it hides', async () => {
    const zeros = Buffer.alloc(60_000_000, ' ');
    await refused(zip([types, book(), links, { name: 'xl/worksheets/sheet1.xml', content: zeros }]), 'bomb.xlsx', /would unpack from/);
    await refused(
      zip([types, book(), links, { name: 'xl/worksheets/sheet1.xml', content: zeros, claimed: 2000 }]),
      'liar.xlsx',
      /larger than it claims/,
    );
    await refused(zip([types, { name: 'xl/worksheets/sheet1.xml', content: Buffer.from('x'), claimed: 0xfffffff0 }]), 'huge.xlsx', /would unpack/);
  }, 30_000);

  it('refuses a protected, a cut and an empty file in one clear error', async () => {
    const whole = zip([types, book(), links, sheet(heads)]);
    await refused(zip([{ ...types, flags: 1 }]), 'locked.xlsx', /password/);
    await refused(whole.subarray(0, whole.length - 40), 'cut.xlsx', /damaged/);
    await refused(Buffer.alloc(0), 'empty.xlsx', /0 bytes/);
    await refused(zip([types, book(), links, sheet('')]), 'bare.xlsx', /holds no cells/);
    await refused(zip([types]), 'none.xlsx', /no list of sheets/);
  });

  it('never evaluates formulas: a cell has its saved value, or none', async () => {
    const row = `<row r="2">${inline('A')}<c><f>1+1</f><v>52.5</v></c><c><f>WEBSERVICE("http://example.invalid")</f></c></row><row r="3">${inline('B')}<c><v>60</v></c><c t="e"><f>1/0</f><v>#DIV/0!</v></c></row>`;
    const { suite, report } = await readText(
      zip([types, book(), links, sheet(heads + row), { name: 'xl/externalLinks/externalLink1.xml', content: Buffer.from('<x/>') }]),
      'formula.xlsx',
    );
    expect(cells(suite, 'SiO2')).toEqual([52.5, 60]);
    expect(cells(suite, 'Ba')).toEqual(['', '']);
    expect(report.pleaseCheck.some((text) => /3 cells hold formulas: their saved values are used, 1 have none/.test(text))).toBe(true);
    expect(report.pleaseCheck.some((text) => /links are not followed/.test(text))).toBe(true);
    expect(report.columns[2].unreadableCells).toEqual([{ address: 'C3', text: '#DIV/0!', why: 'a spreadsheet error' }]);
  });

  it('does not expand entities of its own', async () => {
    const bomb = '<!DOCTYPE x [<!ENTITY a "lol"><!ENTITY b "&a;&a;&a;">]>';
    const content = `${bomb}<worksheet><sheetData>${heads}<row>${inline('&b;')}<c><v>50</v></c><c><v>1</v></c></row></sheetData></worksheet>`;
    const { suite } = await readText(zip([types, book(), links, { name: 'xl/worksheets/sheet1.xml', content: Buffer.from(content) }]), 'entity.xlsx');
    expect(suite.samples).toEqual(['&b;']);
  });

  it('refuses a sheet of 20,000 columns and a cell beyond the last row', async () => {
    const wide = `<row r="1">${Array.from({ length: 20_000 }, (_, i) => `<c><v>${i}</v></c>`).join('')}</row>`;
    await refused(zip([types, book(), links, sheet(wide)]), 'wide.xlsx', /more than 10000 columns/);
    await refused(
      zip([types, book(), links, sheet(`<row r="99999999"><c r="A99999999"><v>1</v></c></row>`)]),
      'far.xlsx',
      /beyond what a sheet can have/,
    );
  });

  it('refuses an .ods whose repeat counts stand for millions of cells', async () => {
    const content =
      '<office><table:table><table:table-row table:number-rows-repeated="1000000"><table:table-cell office:value-type="float" table:number-columns-repeated="16000" office:value="1"/></table:table-row></table:table></office>';
    await refused(
      zip([
        { name: 'mimetype', content: Buffer.from('application/vnd.oasis.opendocument.spreadsheet') },
        { name: 'content.xml', content: Buffer.from(content) },
      ]),
      'repeat.ods',
      /repeat counts/,
    );
  });
});

describe('text files made to harm', () => {
  it('refuses 1 GB of one line without reading it', async () => {
    const path = temporary('line.csv');
    writeFileSync(path, 'SiO2,');
    // A sparse file: it takes no room on the disk.
    truncateSync(path, 1_000_000_000);
    const before = process.memoryUsage().rss;
    await expect(readAssays(path)).rejects.toThrow(/sheets up to|one line/);
    expect((process.memoryUsage().rss - before) / 1e6).toBeLessThan(100);
  });

  it('refuses 300 MB of one line after its first two megabytes', async () => {
    const path = temporary('line.csv');
    const file = openSync(path, 'w');
    writeSync(file, Buffer.alloc(3_000_000, '1,'));
    closeSync(file);
    truncateSync(path, 300_000_000);
    const before = process.memoryUsage().rss;
    await expect(readAssays(path)).rejects.toThrow(/one line/);
    expect((process.memoryUsage().rss - before) / 1e6).toBeLessThan(100);
  });

  it('refuses 20,000 columns, a folder, a missing file, and bytes that are no text', async () => {
    await expect(readText(`${Array.from({ length: 20_000 }, (_, i) => `c${i}`).join(',')}\n`)).rejects.toThrow(/more than 10000 cells/);
    await expect(readAssays('/')).rejects.toThrow(/folder|cannot be opened/);
    await expect(readAssays('no/such/sheet.csv')).rejects.toThrow(/sheet\.csv cannot be opened \(ENOENT\)/);
    await expect(readText(Buffer.from([1, 0, 2, 3, 0, 0, 9, 1, 0, 4]), 'x.bin')).rejects.toThrow(/neither text nor a workbook/);
  });

  it('takes heads named like parts of objects as labels', async () => {
    const { suite } = await readText('Sample,__proto__,constructor,toString,SiO2 (wt%)\nA,x,y,z,52\nB,x2,y2,z2,53\n');
    expect(suite.label('__proto__')).toEqual(['x', 'x2']);
    expect(suite.label('constructor')).toEqual(['y', 'y2']);
    expect([...suite.values('SiO2')]).toEqual([52, 53]);
  });

  it('escapes HTML and scripts in names, heads and the report', async () => {
    const { suite, report, toMimeBundle } = await readText(
      'Sample,"<img src=x onerror=alert(1)>",SiO2 (wt%)\n<script>alert(1)</script>,a,52\nB,b,<b>53</b>\n',
    );
    expect(suite.samples[0]).toBe('<script>alert(1)</script>');
    for (const bundle of [toMimeBundle(), report.toMimeBundle(), suite.toMimeBundle()] as { 'text/html': string; 'text/markdown': string }[]) {
      expect(bundle['text/html']).not.toMatch(/<(script|img|b)[ >]/);
      expect(bundle['text/markdown']).not.toMatch(/<(script|img|b)[ >]/);
    }
    expect(tableHtml({ columns: ['<i>'], rows: [['<i>']] } satisfies TableView)).not.toContain('<i>');
  });
});

describe('sheets that cannot be right get one error or a state', () => {
  it.each([
    ['', /0 bytes/],
    ['\n\n\n', /no head row|no cells/],
    ['Sample,Colour\nA,red\n', /no head row/],
    ['Sample,SiO2 (wt%),Ba (ppm)\n', /no samples below it/],
    ['SiO2 (wt%),Ba (ppm)\nA,52.1,300\nB,53,310\n', /heads do not stand over their columns/],
  ])('%j', async (content, message) => {
    await expect(readText(content)).rejects.toThrow(message);
  });

  it('text in a number cell and a negative value become missing, listed with their address', async () => {
    const { suite, report } = await readText('Sample,SiO2 (wt%),Ba (ppm)\nA,52.1,oops\nB,-3,300\n');
    expect(cells(suite, 'Ba')).toEqual(['', 300]);
    expect(cells(suite, 'SiO2')).toEqual([52.1, '']);
    expect(report.columns[2].unreadableCells).toEqual([{ address: 'C2', text: 'oops', why: 'not a number' }]);
    expect(report.columns[1].unreadableCells).toEqual([{ address: 'B3', text: '-3', why: 'a negative concentration' }]);
  });

  it('two columns for one analyte are kept apart and told', async () => {
    const { suite, report } = await readText('Sample,Zr (ppm),Zr (ppm)\nA,100,90\n');
    expect(cells(suite, 'Zr')).toEqual([100]);
    expect(cells(suite, 'Zr (2)')).toEqual([90]);
    expect(report.pleaseCheck.some((text) => text.includes('Zr stands in 2 columns'))).toBe(true);
  });

  it.each([
    [{ decimal: ';' }, /decimal must be/],
    [{ sheets: 'x' }, /no option "sheets"/],
    [{ headerRow: 0 }, /headerRow/],
    [{ columns: { Bq: 'Ba' } }, /no column is headed "Bq"/],
    [{ columns: { 'SiO2 (wt%)': { as: 'SiO9' } } }, /cannot become "SiO9"/],
    [{ columns: { 'SiO2 (wt%)': { unit: 'furlong' } } }, /unit "furlong"/],
  ])('options %j are refused in words', async (options, message) => {
    await expect(readText('Sample,SiO2 (wt%)\nA,52\n', 'x.csv', options as never)).rejects.toThrow(message);
  });
});
