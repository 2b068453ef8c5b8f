import { Geodesic } from 'geographiclib-geodesic';
import proj4 from 'proj4';

const ellipsoid = Geodesic.WGS84;

/** A longitude as the same meridian in [-180, 180). */
export function wrapLongitude(longitude: number): number {
  const turned = (longitude + 180) % 360;
  return (turned < 0 ? turned + 360 : turned) - 180;
}

/** A longitude as the same meridian within 180° of another one, so that a region across the dateline is in one piece. */
export function longitudeNear(longitude: number, centre: number): number {
  return centre + wrapLongitude(longitude - centre);
}

/** An azimuth as 0–360°. */
export function wrapAzimuth(azimuth: number): number {
  const turned = azimuth % 360;
  return turned < 0 ? turned + 360 : turned;
}

/** The geodesic from one point to another on the WGS84 ellipsoid: length in km, azimuth at the start in degrees. */
export function geodesic(
  longitude1: number,
  latitude1: number,
  longitude2: number,
  latitude2: number,
): { readonly distance: number; readonly azimuth: number } {
  const { s12, azi1 } = ellipsoid.Inverse(latitude1, longitude1, latitude2, longitude2);
  return { distance: s12! / 1000, azimuth: wrapAzimuth(azi1!) };
}

/** The point that lies so many km from another along a geodesic with the given starting azimuth (WGS84). */
export function pointAt(
  longitude: number,
  latitude: number,
  azimuth: number,
  distance: number,
): { readonly longitude: number; readonly latitude: number } {
  const { lat2, lon2 } = ellipsoid.Direct(latitude, longitude, azimuth, distance * 1000);
  return { longitude: wrapLongitude(lon2!), latitude: lat2! };
}

/** The centre of a set of points: the mean direction, which has no seam at the dateline. */
export function centreOf(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): { readonly longitude: number; readonly latitude: number } {
  const radian = Math.PI / 180;
  let x = 0;
  let y = 0;
  let z = 0;
  for (let i = 0; i < longitudes.length; i++) {
    const flat = Math.cos(latitudes[i] * radian);
    x += flat * Math.cos(longitudes[i] * radian);
    y += flat * Math.sin(longitudes[i] * radian);
    z += Math.sin(latitudes[i] * radian);
  }
  return { longitude: Math.atan2(y, x) / radian, latitude: Math.atan2(z, Math.hypot(x, y)) / radian };
}

/**
 * A plane to compute on: the oblique stereographic projection of the WGS84 ellipsoid about a centre, in km. It is conformal, so that
 * azimuths hold, triangles that are Delaunay on the globe stay so, and a slope needs one scale factor; it has no seam at the dateline or
 * the pole. At 1000 km from the centre lengths are 0.6 % too long; `local` gives the factor.
 */
export interface Plane {
  readonly centre: { readonly longitude: number; readonly latitude: number };
  project(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): { readonly x: Float64Array; readonly y: Float64Array };
  /** Geographic position of a point of the plane. */
  unproject(x: number, y: number): { readonly longitude: number; readonly latitude: number };
  /** Plane km per km on the ground, and the plane's direction of true north (degrees clockwise from +y), at a point. */
  local(longitude: number, latitude: number): { readonly scale: number; readonly north: number };
}

export function planeAbout(centre: { readonly longitude: number; readonly latitude: number }): Plane {
  const { longitude, latitude } = centre;
  const converter = proj4(`+proj=stere +lat_0=${latitude} +lon_0=${longitude} +k=1 +x_0=0 +y_0=0 +ellps=WGS84 +units=km +no_defs`);
  const forward = (lon: number, lat: number): readonly number[] => converter.forward([longitudeNear(lon, longitude), lat]);
  const step = 0.01;
  return {
    centre,
    project(longitudes, latitudes) {
      const x = new Float64Array(longitudes.length);
      const y = new Float64Array(longitudes.length);
      for (let i = 0; i < x.length; i++) {
        if (!Number.isFinite(longitudes[i]) || !Number.isFinite(latitudes[i])) {
          x[i] = NaN;
          y[i] = NaN;
          continue;
        }
        const point = forward(longitudes[i], latitudes[i]);
        x[i] = point[0];
        y[i] = point[1];
      }
      return { x, y };
    },
    unproject(x, y) {
      const [lon, lat] = converter.inverse([x, y]);
      return { longitude: wrapLongitude(lon), latitude: lat };
    },
    local(lon, lat) {
      // A short step along the meridian: its length on the ellipsoid is the meridian's radius of curvature times the angle.
      const south = forward(lon, lat - step / 2);
      const north = forward(lon, lat + step / 2);
      const east = north[0] - south[0];
      const up = north[1] - south[1];
      return { scale: Math.hypot(east, up) / (meridianRadius(lat) * ((step * Math.PI) / 180)), north: (Math.atan2(east, up) * 180) / Math.PI };
    },
  };
}

/** Radius of curvature of the meridian in km (WGS84). */
function meridianRadius(latitude: number): number {
  const eccentricity2 = ellipsoid.f * (2 - ellipsoid.f);
  const sine = Math.sin((latitude * Math.PI) / 180);
  return ((ellipsoid.a / 1000) * (1 - eccentricity2)) / (1 - eccentricity2 * sine * sine) ** 1.5;
}
