import type { SymbolInfo } from '../engine/tslab-contract';

const tagTitles: Readonly<Record<string, string>> = {
  returns: 'Returns',
  return: 'Returns',
  throws: 'Throws',
  source: 'Source',
  example: 'Example',
  deprecated: 'Deprecated',
};

/** What is known of a name, as plain text and as Markdown, with its doc comment. */
export function symbolText({ signature, documentation, tags }: SymbolInfo): { plain: string; markdown: string } {
  const plain = [signature];
  const markdown = ['```typescript', signature, '```'];
  if (documentation !== '') {
    plain.push('', documentation);
    markdown.push('', documentation);
  }
  if (tags.length > 0) {
    plain.push('');
    markdown.push('');
  }
  for (const { name, text } of tags) {
    const title = tagTitles[name] ?? name;
    if (name === 'param') {
      plain.push(text);
      markdown.push(`- ${text.replace(/^\S+/, '`$&`')}`);
    } else if (name === 'example') {
      plain.push('', `${title}:`, text);
      markdown.push('', `**${title}**`, '', '```typescript', text, '```');
    } else {
      plain.push(`${title}: ${text}`);
      markdown.push(`- **${title}** ${text}`);
    }
  }
  return { plain: plain.join('\n'), markdown: markdown.join('\n') };
}
