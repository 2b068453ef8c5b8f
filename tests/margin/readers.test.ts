import { describe, expect, test } from 'vitest';
import { PointTableError, readHypocentres, readSlabPoints, readTrench } from 'wedgework';
import { csv, dataFile } from './files';

describe('reading tables of points', () => {
  test('a catalogue export: heads are recognised, rows that are not earthquakes are left out and counted', async () => {
    const events = await readHypocentres(
      csv(
        'quakes.csv',
        'time,latitude,longitude,depth,mag,depthError,type\nt,-44,-129,82.5,4.1,3.2,earthquake\n' +
          't,-44,-129,0,1,,quarry blast\nt,-45,-130,,3,,earthquake\n',
      ),
    );
    expect(events.size).toBe(1);
    expect([events.longitude[0], events.latitude[0], events.depth[0], events.depthError![0], events.magnitude![0]]).toEqual([
      -129, -44, 82.5, 3.2, 4.1,
    ]);
    expect(events.notes).toHaveLength(2);
    expect(events.lineage[0].detail['sha256']).toMatch(/^[0-9a-f]{64}$/);
  });

  test('other spellings, semicolons, a byte-order mark, longitudes to 360', async () => {
    const events = await readHypocentres(csv('q.csv', '\uFEFFLon (°E);Lat (°N);Depth (km)\n230.5;-44;100\n'));
    expect(events.longitude[0]).toBe(230.5);
  });

  test.each([
    ['latitude,longitude\n1,2\n', /q\.csv, line 1: no column for depth/],
    ['latitude,longitude,depth\n1,2,deep\n', /q\.csv, line 2, column "depth": "deep" is not a number/],
    ['latitude,longitude,depth\n1,2,10\n91,2,10\n', /q\.csv, line 3, column "latitude": 91 is outside -90 to 90/],
    ['latitude,longitude,depth\n1,2,10\n1,2\n', /q\.csv, line 3: 2 cells under 3 column heads/],
    ['latitude,longitude,depth\n', /no rows/],
    ['', /empty/],
  ])('a table that cannot be understood stops with one error: %j', async (text, message) => {
    await expect(readHypocentres(csv('q.csv', text))).rejects.toThrow(message);
    await expect(readHypocentres(csv('q.csv', text))).rejects.toBeInstanceOf(PointTableError);
  });

  test('a file that is not there', async () => {
    await expect(readTrench('/no/such/file.csv')).rejects.toThrow(/cannot be read \(ENOENT\)/);
  });

  test('slab depths: one slab is chosen by name, negative depths are turned, gaps in a grid are counted', async () => {
    const kuriles = await readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'kur' });
    expect(kuriles.size).toBeGreaterThan(2000);
    await expect(readSlabPoints(dataFile('slab-depth-contours.csv'))).rejects.toThrow(/holds 4 slabs \(alu, izu, van, kur\)/);
    await expect(readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'xyz' })).rejects.toThrow(/no slab "xyz"/);
    const grid = await readSlabPoints(csv('grid.csv', 'x,y,z\n1,1,-20\n2,1,-40\n1,2,NaN\n'));
    expect([...grid.depth]).toEqual([20, 40]);
    expect(grid.notes.join(' ')).toMatch(/1 of 3 points/);
    expect(grid.notes.join(' ')).toMatch(/negative/);
  });

  test('a trench line', async () => {
    const line = await readTrench(csv('trench.csv', 'longitude,latitude\n-128.1,-42\n-128.3,-44\n-128.2,-46\n'));
    expect(line.longitude).toHaveLength(3);
    await expect(readTrench(csv('trench.csv', 'longitude,latitude\n-128.1,-42\n'))).rejects.toThrow(/at least two points/);
  });
});
