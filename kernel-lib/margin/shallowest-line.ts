import { geodesic } from './geodesy';
import type { SlabPoints } from './slab-points';
import { trenchLine, type TrenchLine } from './trench';

/** Deepest contour that may stand in for the trench, km. */
const deepestStandIn = 20;

/**
 * The shallowest contour of a slab as a line to measure from, when it is at 20 km or less: its pieces joined end to end, nearest ends
 * first. Undefined for a grid (points without pieces) or where the shallowest contour is deeper.
 */
export function shallowestLine(points: SlabPoints): TrenchLine | undefined {
  if (points.piece === undefined) return undefined;
  let shallowest = Infinity;
  for (const depth of points.depth) if (depth >= 0) shallowest = Math.min(shallowest, depth);
  if (!(shallowest <= deepestStandIn)) return undefined;
  const pieces = new Map<string, number[]>();
  for (let i = 0; i < points.size; i++) {
    if (points.depth[i] !== shallowest) continue;
    const piece = pieces.get(points.piece[i]);
    if (piece === undefined) pieces.set(points.piece[i], [i]);
    else piece.push(i);
  }
  const joined = joinPieces(
    [...pieces.values()].filter((piece) => piece.length > 1),
    points,
  );
  if (joined.length < 2) return undefined;
  return trenchLine(
    joined.map((i) => points.longitude[i]),
    joined.map((i) => points.latitude[i]),
    { name: `${shallowest} km contour` },
  );
}

function joinPieces(pieces: number[][], { longitude, latitude }: SlabPoints): number[] {
  if (pieces.length === 0) return [];
  const gap = (a: number, b: number) => geodesic(longitude[a], latitude[a], longitude[b], latitude[b]).distance;
  pieces.sort((a, b) => b.length - a.length);
  let line = pieces.shift()!;
  while (pieces.length > 0) {
    let best = { gap: Infinity, at: 0, join: (piece: number[]) => [...line, ...piece] };
    pieces.forEach((piece, at) => {
      const first = piece[0];
      const last = piece[piece.length - 1];
      const head = line[0];
      const tail = line[line.length - 1];
      const ways: readonly (readonly [number, (piece: number[]) => number[]])[] = [
        [gap(tail, first), (p) => [...line, ...p]],
        [gap(tail, last), (p) => [...line, ...p.reverse()]],
        [gap(head, last), (p) => [...p, ...line]],
        [gap(head, first), (p) => [...p.reverse(), ...line]],
      ];
      for (const [distance, join] of ways) if (distance < best.gap) best = { gap: distance, at, join };
    });
    line = best.join(pieces.splice(best.at, 1)[0]);
  }
  return line;
}
