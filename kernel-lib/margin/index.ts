/** margin/: the slab below an arc: its surface, depth below each volcano, kinematics, trends across the arc, thickness of the crust. */
export { PointTableError } from './table-input';
export { hypocentresOf, readHypocentres, type Hypocentres } from './hypocentres';
export { readSlabPoints, slabPoints, type SlabPoints } from './slab-points';
export { readTrench, trenchLine, type TrenchLine } from './trench';
export { slabSupport, slabSupportNames, type ShownSlabSurface, type SlabBelow, type SlabSurface } from './slab';
export { slabFromDepths, type PublishedSlabOptions } from './contour-surface';
export { slabFromHypocentres, type HypocentreSlab, type HypocentreSlabOptions } from './hypocentre-surface';
export { eventKind, eventKindNames } from './event-choice';
