import { inspect } from 'node:util';
import { jupyterDisplay, type MimeBundle, type Showable } from '../display';
import type { Step } from '../suite';
import type { VegaSpec } from './frame';
import { renderPng, renderSvg, type Picture } from './render';

/** How many samples a diagram shows, and why the others are not there. */
export interface DiagramCounts {
  readonly plotted: number;
  readonly notPlotted: number;
  /** Reason → number of samples. */
  readonly reasons: Readonly<Record<string, number>>;
}

/**
 * A finished diagram: plain data, and the means to draw it. As the last value of a notebook cell it shows itself; `saveSvg`, `savePng`,
 * `savePdf` and `saveHtml` write it to a file.
 */
export interface Diagram extends Showable {
  readonly name: string;
  /** Vega-Lite (version 5) specification, data included. */
  readonly spec: VegaSpec;
  readonly lineage: readonly Step[];
  readonly counts: DiagramCounts;
  /** One sentence that says what the diagram shows; it stands for the picture where only text can be shown. */
  readonly description: string;
  /** `application/vnd.vegalite.v5+json`, `image/png` (base64, two pixels to one of the page) and `text/plain`. */
  toMimeBundle(): Promise<MimeBundle>;
  /** The picture as SVG text. */
  svg(): Promise<string>;
  /** The picture as PNG bytes; `scale` is the number of pixels to one of the page (default 2). */
  png(options?: { readonly scale?: number }): Promise<Uint8Array>;
}

/** MIME type of a Vega-Lite 5 specification, which JupyterLab and VS Code draw. */
export const vegaLiteType = 'application/vnd.vegalite.v5+json';

/** Data above this size go to front ends as picture alone: notebooks stay openable. */
const mostSpecBytes = 1_000_000;

/** Makes a diagram of a finished specification. Drawing happens when it is asked for, once. */
export function diagramOf(parts: Pick<Diagram, 'name' | 'spec' | 'lineage' | 'counts' | 'description'>): Diagram {
  let svg: Promise<string> | undefined;
  let picture: Promise<Picture> | undefined;
  const draw = () => (svg ??= renderSvg(parts.spec));
  const paint = () => (picture ??= draw().then((text) => renderPng(text)));
  const hidden = {
    svg: draw,
    async png({ scale = 2 }: { scale?: number } = {}): Promise<Uint8Array> {
      if (!(typeof scale === 'number' && scale > 0 && scale <= 10))
        throw new RangeError(`png: scale must be a number above 0 and up to 10, not ${String(scale)}.`);
      return scale === 2 ? (await paint()).bytes : renderPng(await draw(), scale).bytes;
    },
    async toMimeBundle(): Promise<MimeBundle> {
      const { bytes } = await paint();
      const small = JSON.stringify(parts.spec).length <= mostSpecBytes;
      return {
        ...(small ? { [vegaLiteType]: parts.spec } : {}),
        'image/png': Buffer.from(bytes).toString('base64'),
        'text/plain': parts.description,
      };
    },
  };
  // Front ends that draw Vega draw vectors: sharp at any zoom of the page.
  const toMimeMetadata = () => ({ [vegaLiteType]: { embed_options: { renderer: 'svg' } } });
  const diagram = { ...parts };
  for (const [name, value] of Object.entries({ ...hidden, toMimeMetadata })) Object.defineProperty(diagram, name, { value, enumerable: false });
  Object.defineProperty(diagram, jupyterDisplay, { value: hidden.toMimeBundle, enumerable: false });
  Object.defineProperty(diagram, inspect.custom, { value: () => parts.description, enumerable: false });
  return diagram as Diagram;
}

export function isDiagram(value: unknown): value is Diagram {
  return typeof value === 'object' && value !== null && typeof (value as Partial<Diagram>).svg === 'function' && 'spec' in value;
}
