import type { SymbolInfo } from '../engine/tslab-contract';

const tagTitles: Readonly<Record<string, string>> = { returns: 'Returns', return: 'Returns', throws: 'Throws', source: 'Source', example: 'Example', deprecated: 'Deprecated' };

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
    const title = name === 'param' ? '' : `${tagTitles[name] ?? name}: `;
    plain.push(`${title}${text}`);
    markdown.push(name === 'example' ? `**Example**\n\`\`\`typescript\n${text}\n\`\`\`` : `- ${title === '' ? '' : `**${title.slice(0, -2)}** `}${text}`);
  }
  return { plain: plain.join('\n'), markdown: markdown.join('\n') };
}
