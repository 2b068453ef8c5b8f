import type { ModelPath } from '../models';
import type { Suite } from '../suite';
import { numberText } from './chemical-text';
import type { PathShape } from './layers/markers';
import type { Point } from './geometry';

/** What a diagram takes as a path: the result of a model (`crystallise`, `mix`, `melt` …), or points in the units of its axes. */
export type PathInput = ModelPath | PathShape | { readonly path: ModelPath; readonly label?: string; readonly ticks?: readonly number[] };

/** Where the samples of a suite lie on a diagram's two axes. */
export type AxesOf = (suite: Suite) => { readonly x: ArrayLike<number>; readonly y: ArrayLike<number> };

function isModelPath(input: unknown): input is ModelPath {
  return typeof input === 'object' && input !== null && 'liquid' in input && 'F' in input;
}

/**
 * Paths ready to draw: a model's liquid is put on the diagram's own axes, with ticks at round values of F.
 *
 * @throws RangeError for something that is no path; whatever `axesOf` throws where the path lacks an analyte
 */
export function pathShapes(
  who: string,
  paths: readonly PathInput[] | undefined,
  axesOf: AxesOf,
): { readonly shapes: readonly PathShape[]; readonly notes: readonly string[] } {
  if (paths === undefined) return { shapes: [], notes: [] };
  if (!Array.isArray(paths)) throw new RangeError(`${who}: paths must be a list, e.g. paths: [path].`);
  const shapes: PathShape[] = [];
  const notes = new Set<string>();
  for (const input of paths as readonly PathInput[]) {
    if (isModelPath(input) || (typeof input === 'object' && input !== null && 'path' in input && isModelPath(input.path))) {
      const { path, label, ticks } = isModelPath(input) ? { path: input, label: undefined, ticks: undefined } : input;
      shapes.push(modelShape(path, axesOf(path.liquid), label ?? path.process, ticks));
      notes.add(`Path of ${path.process}: figures along it are F, ${path.meaning}.`);
    } else if (Array.isArray((input as Partial<PathShape> | null)?.points)) shapes.push(input as PathShape);
    else throw new RangeError(`${who}: each of paths must be the result of a model, { path, label, ticks }, or { points: [[x, y], …], label }.`);
  }
  return { shapes, notes: [...notes] };
}

function modelShape({ F }: ModelPath, { x, y }: ReturnType<AxesOf>, label: string, wanted: readonly number[] | undefined): PathShape {
  const points: Point[] = [];
  const at: number[] = [];
  for (let i = 0; i < F.length; i++) {
    if (!Number.isFinite(x[i]) || !Number.isFinite(y[i])) continue;
    points.push([x[i], y[i]]);
    at.push(F[i]);
  }
  const ticks = (wanted ?? roundTicks(at)).flatMap((value) => {
    const place = interpolate(at, points, value);
    return place === undefined ? [] : [{ x: place[0], y: place[1], label: numberText(value) }];
  });
  return { points, label, ticks };
}

/** Up to six round values of F inside its range. */
function roundTicks(F: readonly number[]): number[] {
  const low = Math.min(...F);
  const high = Math.max(...F);
  const step = [0.01, 0.02, 0.05, 0.1, 0.2, 0.5].find((each) => (high - low) / each <= 6.001) ?? 1;
  const ticks: number[] = [];
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9; k++) {
    const value = Number((k * step).toPrecision(6));
    // The start of a path needs no figure: F is 1 (or 0) there.
    if (value > 0 && value < 1) ticks.push(value);
  }
  return ticks;
}

function interpolate(F: readonly number[], points: readonly Point[], value: number): Point | undefined {
  for (let i = 1; i < F.length; i++) {
    const [a, b] = [F[i - 1], F[i]];
    if (a === b || (value - a) * (value - b) > 0) continue;
    const share = (value - a) / (b - a);
    return [points[i - 1][0] + share * (points[i][0] - points[i - 1][0]), points[i - 1][1] + share * (points[i][1] - points[i - 1][1])];
  }
  return undefined;
}
