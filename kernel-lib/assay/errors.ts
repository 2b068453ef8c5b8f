/** A sheet that cannot be read, or that would be read wrongly. The message says what, where (file, sheet, row) and what to do. */
export class AssayError extends Error {
  override readonly name = 'AssayError';
}
