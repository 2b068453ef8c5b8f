/** margin/: the slab below an arc: its surface, depth below each volcano, kinematics, trends across the arc, thickness of the crust. */
export { PointTableError } from './table-input';
export { hypocentresOf, readHypocentres, type Hypocentres } from './hypocentres';
export { readSlabPoints, slabPoints, type SlabPoints } from './slab-points';
export { readTrench, trenchLine, type TrenchLine } from './trench';
export { slabSupport, slabSupportNames, type ShownSlabSurface, type SlabBelow, type SlabSurface } from './slab';
export { slabFromDepths, type PublishedSlabOptions } from './contour-surface';
export { slabFromHypocentres, type HypocentreSlab, type HypocentreSlabOptions } from './hypocentre-surface';
export { eventKind, eventKindNames } from './event-choice';
export { slabBelow, slabColumns, withCoordinates, type SlabBelowPoints } from './slab-below';
export { volcanoesAbove, type VolcanoAbove, type VolcanoesAbove } from './volcanoes-above';
export {
  plateVelocity,
  rateInMillimetres,
  slabKinematics,
  withKinematics,
  type PlateMotion,
  type Rate,
  type RateUnit,
  type SlabKinematics,
} from './kinematics';
export { plausibleRanges, pointOut, type PlausibleRange } from './plausibility';
export { atComposition, type AtComposition, type CompositionIndex, type ArcValue, type ArcValueOptions, type ArcValues } from './at-composition';
export { crossArcTrend, type ArcTrend, type ArcTrendOptions, type ArcTrendPoint } from './trend';
export type { Line, RobustMethod } from './regression';
export { crustCalibrations, thicknessFromRatios, type CrustCalibration } from './crust';
export { crustalThickness, type CrustalThickness, type CrustEstimate, type CrustOptions } from './crustal-thickness';
export { slabContours, type SlabContour } from './slab-contours';
export { geodesic, longitudeNear, pointAt } from './geodesy';
