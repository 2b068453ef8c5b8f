import { describe, expect, it } from 'vitest';
import fc from 'fast-check';
import { escapeHtml, formatNumber, showAs, tableBundle, tableHtml, tableText } from 'wedgework';

describe('tableBundle', () => {
  const hostile = '<script>alert("1")</script> | *x*';

  it('escapes every text in HTML and Markdown', () => {
    const bundle = tableBundle({ title: hostile, columns: [hostile], rows: [[hostile]], notes: [hostile] });
    expect(bundle['text/html']).not.toContain('<script');
    const markdown = String(bundle['text/markdown']);
    expect(markdown).not.toContain('<script');
    // Only the column bars that we write are unescaped: two in each of the three table lines.
    expect(markdown.replace(/\\\|/g, '').match(/\|/g)).toHaveLength(6);
  });

  it('never lets text become markup, whatever the text', () => {
    fc.assert(
      fc.property(fc.string(), (text) => {
        const html = tableHtml({ columns: ['a'], rows: [[text]] });
        expect(html.match(/</g)!.length).toBe(tableHtml({ columns: ['a'], rows: [['x']] }).match(/</g)!.length);
      }),
    );
  });

  it('cuts a long table with a count', () => {
    const rows = Array.from({ length: 500 }, (_, i) => [i]);
    expect(tableText({ columns: ['n'], rows })).toContain('60 of 500 rows shown.');
    expect(tableText({ columns: ['n'], rows: rows.slice(0, 5), totalRows: 1000 })).toContain('5 of 1000 rows shown.');
  });

  it('shows nothing for a missing value', () => {
    expect(tableHtml({ columns: ['a', 'b', 'c'], rows: [[null, NaN, undefined]] })).toContain('<td></td><td align="right"></td><td></td>');
  });
});

describe('formatNumber', () => {
  it.each([
    [0, '0'], [-0, '0'], [0.1 + 0.2, '0.3'], [1234567.8, '1234570'], [12345678, '1.235e+7'], [1e-9, '1.000e-9'], [NaN, ''], [Infinity, 'Infinity'],
  ])('%d reads %s', (value, text) => expect(formatNumber(value)).toBe(text));
});

describe('showAs', () => {
  it('leaves a result plain data', () => {
    const result = showAs({ answer: 42 }, ({ answer }) => ({ columns: ['answer'], rows: [[answer]] }));
    expect(JSON.stringify(result)).toBe('{"answer":42}');
    expect(Object.keys(result)).toEqual(['answer']);
    expect(result.toMimeBundle()).toHaveProperty('text/plain');
  });
});

it('escapeHtml escapes quotes too, so that a text may stand in an attribute', () => {
  expect(escapeHtml(`"'&<>`)).toBe('&quot;&#39;&amp;&lt;&gt;');
});
