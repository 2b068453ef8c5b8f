import { existsSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { fontFamily } from './theme';

const load = createRequire(__filename);

/** How a text is set: pixels, and the face of the shipped family. */
export interface TextStyle {
  readonly size: number;
  readonly italic?: boolean;
  readonly bold?: boolean;
}

type Face = 'regular' | 'italic' | 'bold';
const faceFiles: Readonly<Record<Face, string>> = {
  regular: 'SourceSans3-Regular.ttf',
  italic: 'SourceSans3-It.ttf',
  bold: 'SourceSans3-Semibold.ttf',
};

let folder: string | undefined;

/** kernel-lib/assets/fonts/, found by walking up, from the sources as from the build. */
function fontFolder(): string {
  if (folder !== undefined) return folder;
  for (let at = __dirname; ; at = dirname(at)) {
    const candidate = join(at, 'assets', 'fonts');
    if (existsSync(join(candidate, faceFiles.regular))) return (folder = candidate);
    if (dirname(at) === at) throw new Error('The folder assets/fonts/ was not found beside the library. Reinstall wedgework.');
  }
}

/** Path of a shipped font file (OpenType, SIL Open Font License; licence beside it). */
export function fontFile(face: Face): string {
  return join(fontFolder(), faceFiles[face]);
}

/** Paths of all shipped font files. */
export function fontFiles(): readonly string[] {
  return (Object.keys(faceFiles) as Face[]).map(fontFile);
}

interface Metrics {
  readonly widthOf: (codePoint: number) => number;
}

const metrics = new Map<Face, Metrics>();

function metricsOf(face: Face): Metrics {
  let known = metrics.get(face);
  if (known === undefined) {
    const font = (load('fontkit') as typeof import('fontkit')).openSync(fontFile(face)) as import('fontkit').Font;
    const widths = new Map<number, number>();
    const widthOf = (codePoint: number): number => {
      let width = widths.get(codePoint);
      if (width === undefined) widths.set(codePoint, (width = font.glyphForCodePoint(codePoint).advanceWidth / font.unitsPerEm));
      return width;
    };
    metrics.set(face, (known = { widthOf }));
  }
  return known;
}

/** Width of one line of text in the shipped font, in pixels (kerning, which only narrows it, left out). */
export function textWidth(text: string, { size, italic = false, bold = false }: TextStyle): number {
  const { widthOf } = metricsOf(bold ? 'bold' : italic ? 'italic' : 'regular');
  let width = 0;
  for (const character of text) width += widthOf(character.codePointAt(0)!);
  return width * size;
}

/** Whether the shipped font can draw every character of the text. */
export function canDraw(text: string): boolean {
  const font = (load('fontkit') as typeof import('fontkit')).openSync(fontFile('regular')) as import('fontkit').Font;
  return [...text].every((character) => font.hasGlyphForCodePoint(character.codePointAt(0)!));
}

/** Breaks a text into lines no wider than `width` pixels, at spaces; a single longer word stands alone. */
export function wrapText(text: string, width: number, style: TextStyle): string[] {
  const lines: string[] = [];
  let line = '';
  for (const word of text.split(' ')) {
    const longer = line === '' ? word : `${line} ${word}`;
    if (line !== '' && textWidth(longer, style) > width) {
      lines.push(line);
      line = word;
    } else line = longer;
  }
  if (line !== '') lines.push(line);
  return lines;
}

/** The scenegraph item that Vega asks the width of. */
interface MeasuredItem {
  readonly font?: string;
  readonly fontSize?: number;
  readonly fontStyle?: string;
  readonly fontWeight?: string | number;
}

/**
 * Vega without a canvas only guesses how wide a text is; this gives it the true widths of the shipped font, so that legends and titles
 * get the room they need. Texts in any other family keep Vega's guess.
 */
export function teachWidths(textMetrics: {
  width: (item: MeasuredItem, text: unknown) => number;
  estimateWidth: (item: MeasuredItem, text: unknown) => number;
}): void {
  textMetrics.width = (item, text) => {
    if (item.font !== undefined && !item.font.includes(fontFamily)) return textMetrics.estimateWidth(item, text);
    const bold = item.fontWeight === 'bold' || Number(item.fontWeight) >= 600;
    return textWidth(text === null || text === undefined ? '' : String(text), {
      size: item.fontSize ?? 11,
      italic: item.fontStyle === 'italic',
      bold,
    });
  };
}
