import { createRequire } from 'node:module';
import { fontFamily } from './theme';
import { fontFiles, teachWidths } from './font';
import type { VegaSpec } from './frame';

// Vega, Vega-Lite and the rasteriser are heavy, so the first drawing loads them, not the library.
const load = createRequire(__filename);

interface Drawing {
  readonly vega: typeof import('vega');
  readonly vegaLite: typeof import('vega-lite');
}

let drawing: Drawing | undefined;

function drawingLibraries(): Drawing {
  if (drawing === undefined) {
    const vega = load('vega') as typeof import('vega');
    teachWidths((vega as unknown as { textMetrics: Parameters<typeof teachWidths>[0] }).textMetrics);
    drawing = { vega, vegaLite: load('vega-lite') as typeof import('vega-lite') };
  }
  return drawing;
}

/** Vega's own ids for clips and gradients count up over a process; starting anew makes the same picture the same bytes. */
function startIdsAnew(vega: typeof import('vega')): void {
  const ids = vega as unknown as { resetSVGClipId?: () => void; resetSVGDefIds?: () => void };
  (ids.resetSVGDefIds ?? ids.resetSVGClipId)?.();
}

/**
 * Draws a Vega-Lite specification as SVG text, without a browser, a canvas, or the network.
 *
 * @throws Error when the specification cannot be compiled or drawn; the message is Vega's
 */
export async function renderSvg(spec: VegaSpec): Promise<string> {
  const { vega } = drawingLibraries();
  // Nothing may be fetched: diagrams carry their data.
  const loader = { load: refuse, sanitize: refuse, http: refuse, file: refuse } as never as ReturnType<typeof vega.loader>;
  const failures: string[] = [];
  const logger = quietLogger(
    () => {},
    (text) => failures.push(text),
  );
  const view = new vega.View(vega.parse(compileSpec(spec) as Parameters<typeof vega.parse>[0]), {
    renderer: 'none',
    loader,
    logger: logger as never,
  });
  try {
    startIdsAnew(vega);
    const svg = await view.toSVG();
    // Vega goes on after an error and draws what is left; half a diagram is worse than none.
    if (failures.length > 0) throw new Error(`The diagram could not be drawn: ${failures[0]}`);
    return svg;
  } finally {
    view.finalize();
  }
}

function refuse(): Promise<never> {
  return Promise.reject(new Error('A diagram holds its own data and reads nothing from outside.'));
}

/** A logger that hands warnings and errors on, and prints nothing: a notebook's output is its user's. */
function quietLogger(heard: (text: string) => void = () => {}, failed = heard): object {
  const hear =
    (tell: (text: string) => void) =>
    (...parts: readonly unknown[]): object => {
      tell(parts.map(String).join(' '));
      return logger;
    };
  const logger: object = { level: () => logger, error: hear(failed), warn: hear(heard), info: () => logger, debug: () => logger };
  return logger;
}

/** The Vega specification behind a Vega-Lite one. */
export function compileSpec(spec: VegaSpec): object {
  const { vegaLite } = drawingLibraries();
  return vegaLite.compile(spec as unknown as Parameters<typeof vegaLite.compile>[0], { logger: quietLogger() as never }).spec;
}

/** Warnings that compiling a specification gives; empty for a sound one. */
export function specWarnings(spec: VegaSpec): readonly string[] {
  const { vegaLite } = drawingLibraries();
  const warnings: string[] = [];
  vegaLite.compile(spec as unknown as Parameters<typeof vegaLite.compile>[0], { logger: quietLogger((text) => warnings.push(text)) as never });
  return warnings;
}

/** A drawn picture: PNG bytes and its size in pixels of the page (the bytes hold `scale` times as many). */
export interface Picture {
  readonly bytes: Uint8Array;
  readonly width: number;
  readonly height: number;
}

/** Draws SVG text as PNG with the shipped font alone, so that the picture is the same on every machine. */
export function renderPng(svg: string, scale = 2): Picture {
  const { Resvg } = load('@resvg/resvg-js') as typeof import('@resvg/resvg-js');
  const resvg = new Resvg(svg, {
    fitTo: { mode: 'zoom', value: scale },
    background: 'white',
    font: { fontFiles: [...fontFiles()], loadSystemFonts: false, defaultFontFamily: fontFamily, sansSerifFamily: fontFamily },
  });
  const image = resvg.render();
  return { bytes: image.asPng(), width: Math.round(image.width / scale), height: Math.round(image.height / scale) };
}
