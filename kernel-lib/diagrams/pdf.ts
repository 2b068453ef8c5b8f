import { createRequire } from 'node:module';
import { fontFile } from './font';

const load = createRequire(__filename);

/** The part of PDFKit's document that is used here. */
interface PdfDocument {
  on(event: 'data', heard: (chunk: Uint8Array) => void): void;
  on(event: 'end', heard: () => void): void;
  on(event: 'error', heard: (error: Error) => void): void;
  registerFont(name: string, file: string): void;
  end(): void;
}

type SvgToPdf = (document: PdfDocument, svg: string, x: number, y: number, options: object) => void;

/** Page points (1/72 inch) to one pixel of the page (1/96 inch). */
const pointsPerPixel = 0.75;

/**
 * Draws SVG text as a PDF of one page that just holds it: vectors, with the shipped font embedded. The same SVG gives the same bytes.
 */
export async function renderPdf(svg: string, title: string, lineage = ''): Promise<Uint8Array> {
  const PDFDocument = load('pdfkit') as new (options: object) => PdfDocument;
  const svgToPdf = load('svg-to-pdfkit') as SvgToPdf;
  const size = /<svg[^>]*\bwidth="([\d.]+)"[^>]*\bheight="([\d.]+)"/.exec(svg);
  if (size === null) throw new Error('The drawing has no size, so no page can be made for it.');
  const [width, height] = [Number(size[1]) * pointsPerPixel, Number(size[2]) * pointsPerPixel];
  // A fixed date: the file says nothing about when it was made, and is the same each time.
  const document = new PDFDocument({
    size: [width, height],
    margin: 0,
    info: { Title: title, Keywords: lineage, Creator: 'wedgework', Producer: 'wedgework', CreationDate: new Date(0), ModDate: new Date(0) },
  });
  const chunks: Uint8Array[] = [];
  document.on('data', (chunk: Uint8Array) => chunks.push(chunk));
  const ended = new Promise<void>((done, failed) => {
    document.on('end', done);
    document.on('error', failed);
  });
  document.registerFont('regular', fontFile('regular'));
  document.registerFont('italic', fontFile('italic'));
  document.registerFont('bold', fontFile('bold'));
  svgToPdf(document, svg, 0, 0, {
    width,
    height,
    assumePt: false,
    preserveAspectRatio: 'xMinYMin meet',
    fontCallback: (_family: string, bold: boolean, italic: boolean) => (bold ? 'bold' : italic ? 'italic' : 'regular'),
    warningCallback: () => {},
  });
  document.end();
  await ended;
  return Buffer.concat(chunks);
}
