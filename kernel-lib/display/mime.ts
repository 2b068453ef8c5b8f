/** What a notebook front end may show for a value: MIME type → content (text, base64 image, or a JSON object). */
export interface MimeBundle {
  readonly [mimeType: string]: unknown;
}

/** Anything a notebook can show richly. */
export interface Showable {
  toMimeBundle(): MimeBundle | Promise<MimeBundle>;
}

/** The display convention of JavaScript notebook kernels, which several front-end tools look for. */
export const jupyterDisplay: unique symbol = Symbol.for('Jupyter.display') as never;

export function isShowable(value: unknown): value is Showable {
  return typeof value === 'object' && value !== null && typeof (value as Partial<Showable>).toMimeBundle === 'function';
}
