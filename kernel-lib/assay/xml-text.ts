const named: Readonly<Record<string, string>> = { amp: '&', lt: '<', gt: '>', quot: '"', apos: "'" };

/** Text of XML with its five named and its numbered characters decoded; no other entity is ever expanded. */
export function xmlText(text: string): string {
  if (!text.includes('&')) return text;
  return text.replace(/&(?:#(\d{1,7})|#x([0-9a-fA-F]{1,6})|(\w+));/g, (whole, decimal: string, hex: string, name: string) => {
    if (name !== undefined) return Object.hasOwn(named, name) ? named[name] : whole;
    const code = decimal !== undefined ? Number(decimal) : parseInt(hex, 16);
    return code > 0 && code <= 0x10ffff ? String.fromCodePoint(code) : '';
  });
}

/** The attributes of a start tag. */
export function xmlAttributes(tag: string): Record<string, string> {
  const attributes: Record<string, string> = Object.create(null);
  for (const [, name, double, single] of tag.matchAll(/([\w:.-]+)\s*=\s*(?:"([^"]*)"|'([^']*)')/g)) attributes[name] = xmlText(double ?? single);
  return attributes;
}

/** XML bytes as text, the namespace prefix of the root taken off every tag. */
export function xmlDocument(bytes: Buffer): string {
  const text = bytes[0] === 0xff && bytes[1] === 0xfe ? bytes.toString('utf16le') : bytes.toString('utf8');
  const root = /<(?![?!])([\w.-]+):[\w.-]+/.exec(text.slice(0, 2000));
  return root === null ? text : text.replaceAll(`<${root[1]}:`, '<').replaceAll(`</${root[1]}:`, '</');
}
