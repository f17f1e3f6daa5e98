/** Attributes, types, chunks and places of cells, by hand from what test/data/arrays/make.py puts in. */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { ArrayFile, ArrayVariable } from '../../lib/files/array-file.ts';
import type { FindingList } from '../../lib/files/finding-list.ts';
import { openArrayFile } from '../../lib/files/open-array-file.ts';

const FOLDER = new URL('../data/arrays', import.meta.url).pathname;

async function withFile<T>(name: string, work: (file: ArrayFile) => Promise<T>, bytes?: Uint8Array, findings?: FindingList): Promise<T> {
  const path = join(FOLDER, name);
  const file = (await openArrayFile(bytes ? { name, bytes } : { name, path, bytes: new Uint8Array() }, findings)) as ArrayFile;
  try {
    return await work(file);
  } finally {
    await file.close();
  }
}

function variable(file: ArrayFile, name: string): ArrayVariable {
  return file.variables.find((candidate) => candidate.name === name) as ArrayVariable;
}

describe('attributes and types', () => {
  it('of classic NetCDF', () =>
    withFile('classic.nc', async (file) => {
      expect(file.format).toBe('netcdf-3');
      expect(file.attributes.title).toBe('invented weather');
      const tas = variable(file, 'tas');
      expect(tas.type).toBe('int16');
      expect(tas.chunk).toBeNull();
      expect(tas.attributes).toMatchObject({ _FillValue: [-32767], scale_factor: [0.01], add_offset: [280], units: 'K' });
      expect(variable(file, 'elevation').attributes.valid_range).toEqual([0, 4000]);
      expect(variable(file, 'station').attributes.long_name).toBe('name in °');
    }));

  it('of 64-bit classic NetCDF', () =>
    withFile('wide.nc', async (file) => {
      expect(file.variables.map(({ type }) => type)).toEqual(['int64', 'uint8', 'uint16', 'uint32', 'uint64']);
      expect(variable(file, 'big').attributes.range).toEqual([-5, 5]);
    }));

  it('of NetCDF-4, without those the format keeps house by', () =>
    withFile('chunked.nc', async (file) => {
      expect(file.format).toBe('netcdf-4');
      expect(file.attributes).toEqual({ Conventions: 'CF-1.8' });
      expect(file.variables.map(({ name }) => name)).not.toContain('nv');
      const tas = variable(file, 'tas');
      expect(tas.chunk).toEqual([3, 2, 4]);
      expect(tas.attributes).toEqual({ _FillValue: [-32768], scale_factor: [0.02], add_offset: [270], units: 'K' });
      expect(variable(file, 'pr').attributes.long_name).toBe('Niederschlag °ü');
      expect(variable(file, 'lat').attributes.units).toBe('');
      expect(variable(file, 'height').shape).toEqual([]);
      expect(variable(file, 'met/wind').dimensions).toEqual(['time', 'lat']);
      // written for two days of seven: the rest is its fill value
      expect(variable(file, 'holes').shape).toEqual([7, 5, 6]);
    }));

  it('of Zarr 2: a stated fill value marks missing, zero does not', () =>
    withFile('version2.zarr.zip', async (file) => {
      expect(file.attributes).toEqual({ title: 'invented' });
      expect(variable(file, 'absent').attributes).toEqual({ _FillValue: [65535], scale_factor: [0.5] });
      expect(variable(file, 'nan_fill').attributes._FillValue).toEqual([Number.NaN]);
      expect(variable(file, 'nested/place').attributes).toEqual({});
      expect(variable(file, 'blosc_zstd')).toMatchObject({ type: 'uint16', dimensions: ['time', 'lat', 'lon'], chunk: [3, 2, 4] });
    }));

  it('of Zarr 3: the block of a sharded array is the inner one', () =>
    withFile('version3.zarr.zip', async (file) => {
      expect(file.attributes).toEqual({ title: 'invented 3' });
      expect(variable(file, 'sharded').chunk).toEqual([2, 2]);
      expect(variable(file, 'little').attributes).toEqual({ units: 'K' });
      expect(variable(file, 'big').dimensions[0]).toBe('lat');
    }));

  it('of GeoTIFF bands: packing, missing code, unit, description', () =>
    withFile('area.tif', async (file) => {
      expect(file.attributes.crs).toBe('EPSG:32633');
      const band = variable(file, 'band_2');
      expect(band).toMatchObject({ type: 'int16', dimensions: ['y', 'x'], shape: [20, 33], chunk: [16, 16] });
      expect(band.attributes).toEqual({
        crs: 'EPSG:32633',
        _FillValue: [-999],
        scale_factor: [0.1],
        add_offset: [5],
        units: 'mm & more',
        long_name: '2021-03-02',
      });
    }));
});

describe('places of GeoTIFF cells are centres', () => {
  it('where cells are registered by area: corner (500000, 4500000), cells of 30 m by 20 m', () =>
    withFile('area.tif', async (file) => {
      expect(Array.from(await file.read('x', [0], [2]))).toEqual([500015, 500045]);
      expect(Array.from(await file.read('y', [0], [2]))).toEqual([4499990, 4499970]);
      expect(variable(file, 'x').attributes.standard_name).toBe('projection_x_coordinate');
    }));

  it('where cells are registered by point: the same corner (10, 45) in cells of 0.25° by 0.5°', () =>
    withFile('point.tif', async (file) => {
      expect(Array.from(await file.read('x', [0], [2]))).toEqual([10.125, 10.375]);
      expect(Array.from(await file.read('y', [0], [2]))).toEqual([44.75, 44.25]);
      expect(variable(file, 'y').attributes).toMatchObject({ standard_name: 'latitude', units: 'degrees_north' });
    }));

  it('half a cell apart when only the registration differs', async () => {
    const bytes = new Uint8Array(readFileSync(join(FOLDER, 'point.tif')));
    const words = new DataView(bytes.buffer);
    // the GeoKey GTRasterTypeGeoKey (1025), stored in place as a single value: 2 is point, 1 is area
    let at = 0;
    while (!(words.getUint16(at, true) === 1025 && words.getUint16(at + 2, true) === 0 && words.getUint16(at + 6, true) === 2)) at += 2;
    words.setUint16(at + 6, 1, true);
    await withFile(
      'point.tif',
      async (file) => {
        expect(Array.from(await file.read('x', [0], [1]))).toEqual([10.25]);
        expect(Array.from(await file.read('y', [0], [1]))).toEqual([44.5]);
      },
      bytes,
    );
  });

  it('of two dimensions where rows and columns do not run along the axes', () =>
    withFile('turned.tif', async (file) => {
      expect(variable(file, 'x').shape).toEqual([6, 5]);
      // centre of the cell in row 1, column 2: 500000 + 2.5 · 30 + 1.5 · 5, 4500000 + 2.5 · 4 − 1.5 · 20
      expect(Array.from(await file.read('x', [1, 2], [1, 1]))).toEqual([500082.5]);
      expect(Array.from(await file.read('y', [1, 2], [1, 1]))).toEqual([4499980]);
    }));
});
