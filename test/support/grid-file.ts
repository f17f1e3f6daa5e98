/** A made-up NetCDF-4 file of a large daily grid, for benches: invented numbers, packed to 16 bits, in deflated chunks as archives keep them. */
import { File as Hdf5File, ready } from 'h5wasm/node';
import { mulberry32 } from '../../lib/base/random.ts';

export interface GridFileShape {
  readonly days: number;
  readonly rows: number;
  readonly columns: number;
  /** [days, rows, columns] of a stored block */
  readonly chunk: readonly [number, number, number];
  /** rows and columns that are written, from the first up to before the second; the blocks elsewhere are left out */
  readonly part: { readonly rows: readonly [number, number]; readonly columns: readonly [number, number] };
  readonly variables: readonly { readonly name: string; readonly units: string; readonly scale: number; readonly offset: number }[];
}

const DEFLATE_LEVEL = 2;

/** Writes the file; variables run [time × lat × lon], latitude descending from 49°, cells of 1/24°, days from 1 January 2021. */
export async function writeGridFile(path: string, { days, rows, columns, chunk, part, variables }: GridFileShape): Promise<void> {
  await ready;
  const file = new Hdf5File(path, 'w', { libver: ['v108', 'v110'] });
  const axis = (name: string, values: Float64Array, units: string, standardName: string) => {
    const dataset = file.create_dataset({ name, data: values });
    dataset.create_attribute('units', units);
    dataset.create_attribute('standard_name', standardName);
    dataset.make_scale(name);
  };
  axis(
    'time',
    Float64Array.from({ length: days }, (_, k) => k),
    'days since 2021-01-01',
    'time',
  );
  axis(
    'lat',
    Float64Array.from({ length: rows }, (_, k) => 49 - k / 24),
    'degrees_north',
    'latitude',
  );
  axis(
    'lon',
    Float64Array.from({ length: columns }, (_, k) => -124 + k / 24),
    'degrees_east',
    'longitude',
  );
  const random = mulberry32(3);
  for (const { name, units, scale, offset } of variables) {
    const dataset = file.create_dataset({
      name,
      data: new Int16Array(chunk[0] * chunk[1] * chunk[2]),
      shape: [...chunk],
      maxshape: [days, rows, columns],
      chunks: [...chunk],
      compression: 'gzip',
      compression_opts: DEFLATE_LEVEL,
    });
    dataset.resize([days, rows, columns]);
    for (let day = 0; day < days; day += chunk[0]) {
      const end = Math.min(day + chunk[0], days);
      dataset.write_slice([[day, end], [...part.rows], [...part.columns]], slab(random, day, end, part));
    }
    dataset.create_attribute('units', units);
    dataset.create_attribute('scale_factor', scale, [], '<d');
    dataset.create_attribute('add_offset', offset, [], '<d');
    dataset.create_attribute('_FillValue', -32768, [], '<h');
    for (const [k, dimension] of ['time', 'lat', 'lon'].entries()) dataset.attach_scale(k, dimension);
  }
  file.close();
}

/** A smooth field with a season and noise, as stored numbers. */
function slab(random: () => number, from: number, to: number, { rows, columns }: GridFileShape['part']): Int16Array {
  const values = new Int16Array((to - from) * (rows[1] - rows[0]) * (columns[1] - columns[0]));
  let place = 0;
  for (let day = from; day < to; day++) {
    const season = 1000 * Math.sin(day / 58);
    for (let row = rows[0]; row < rows[1]; row++) {
      const band = season + 800 * Math.sin(row / 97);
      for (let column = columns[0]; column < columns[1]; column++) {
        values[place++] = band + 300 * Math.cos(column / 154) + 120 * random();
      }
    }
  }
  return values;
}
