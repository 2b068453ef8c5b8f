import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { trenchLine } from 'wedgework';
import { centreOf, geodesic, longitudeNear, planeAbout, pointAt, wrapLongitude } from '../../kernel-lib/margin/geodesy';
import { measureFromLine } from '../../kernel-lib/margin/trench';

describe('geodesy', () => {
  test('one degree of latitude and longitude on WGS84', () => {
    // Length of a degree of the meridian from the equator: 110.574 km; of the equator: 111.320 km (handbooks of geodesy)
    expect(geodesic(0, 0, 0, 1).distance).toBeCloseTo(110.574, 3);
    expect(geodesic(179.5, 0, -179.5, 0).distance).toBeCloseTo(111.319, 2);
    expect(geodesic(0, 0, 0, 1).azimuth).toBeCloseTo(0, 9);
  });

  test('longitudes have no seam', () => {
    fc.assert(
      fc.property(fc.double({ min: -720, max: 720, noNaN: true }), fc.double({ min: -180, max: 180, noNaN: true }), (longitude, centre) => {
        const near = longitudeNear(longitude, centre);
        expect(Math.abs(near - centre)).toBeLessThanOrEqual(180 + 1e-9);
        expect(Math.abs(Math.sin(((near - longitude) * Math.PI) / 360))).toBeLessThan(1e-9);
      }),
    );
    expect(wrapLongitude(190)).toBe(-170);
    expect(centreOf([179, -179], [10, 10]).longitude).toBeCloseTo(180, 6);
  });

  test('the plane keeps distances by its scale, and azimuths', () => {
    // Checked against geodesics on the ellipsoid, up to 900 km from the centre and over the dateline.
    const place = fc.record({
      latitude: fc.double({ min: -70, max: 70, noNaN: true }),
      longitude: fc.double({ min: -180, max: 180, noNaN: true }),
      azimuth: fc.double({ min: 0, max: 360, noNaN: true }),
      away: fc.double({ min: 1, max: 900, noNaN: true }),
      towards: fc.double({ min: 0, max: 360, noNaN: true }),
    });
    fc.assert(
      fc.property(place, ({ latitude, longitude, azimuth, away, towards }) => {
        const plane = planeAbout({ longitude, latitude });
        const start = pointAt(longitude, latitude, azimuth, away);
        const end = pointAt(start.longitude, start.latitude, towards, 2);
        const { x, y } = plane.project([start.longitude, end.longitude], [start.latitude, end.latitude]);
        const { scale, north } = plane.local(start.longitude, start.latitude);
        expect(Math.hypot(x[1] - x[0], y[1] - y[0]) / scale).toBeCloseTo(2, 3);
        const bearing = (Math.atan2(x[1] - x[0], y[1] - y[0]) * 180) / Math.PI - north;
        expect(Math.abs(Math.sin(((bearing - towards) * Math.PI) / 360))).toBeLessThan(5e-4);
        const back = plane.unproject(x[0], y[0]);
        expect(geodesic(back.longitude, back.latitude, start.longitude, start.latitude).distance).toBeLessThan(1e-4);
      }),
      { numRuns: 200 },
    );
  });

  test('distance from a line is geodesic, signed by side, and runs along it', () => {
    const line = trenchLine([179, -179], [-20, -20]);
    const at = measureFromLine(line, [180, 180, -175], [-21, -19, -20]);
    const foot = geodesic(179, -20, -179, -20).distance;
    expect(at.distance[0]).toBeGreaterThan(109);
    expect(at.distance[0]).toBeLessThan(112);
    expect(at.distance[1]).toBeLessThan(-109);
    expect(at.along[0]).toBeCloseTo(foot / 2, 0);
    expect(at.beyondEnd[2]).toBe(1);
    expect(at.distance[2]).toBeCloseTo(geodesic(-175, -20, -179, -20).distance, 2);
  });
});
