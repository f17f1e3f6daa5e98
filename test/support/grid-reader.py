"""The other side of the bench of grids: copies a variable with other filters and blocks, and reads windows by xarray.

Takes commands, one a line, and answers each with a line. Ends with status 3 where netCDF4, numpy or xarray is missing.

    copy SOURCE TARGET int16|float32 plain|shuffled DAYS CHUNK_DAYS CHUNK_ROWS CHUNK_COLUMNS
    read PATH stored|unpacked DAYS        -> seconds by the clock, seconds of processor, sum of the values
"""
import sys, time
try:
    import netCDF4, numpy, xarray
except ImportError:
    sys.exit(3)
ROWS, COLUMNS = slice(200, 400), slice(600, 800)
WRITTEN = (slice(192, 448), slice(576, 832))


def copy(source, target, kind, filters, days, *chunk):
    """The part that is written stands in place of what the source leaves out: no block is empty."""
    days = int(days)
    chunk = [min(days, int(chunk[0])), int(chunk[1]), int(chunk[2])]
    with netCDF4.Dataset(source) as old, netCDF4.Dataset(target, 'w') as new:
        shape = old['tas'].shape
        old['tas'].set_auto_maskandscale(False)
        for name, length in zip(('time', 'lat', 'lon'), (days, *shape[1:])):
            new.createDimension(name, length)
        variable = new.createVariable('tas', kind, ('time', 'lat', 'lon'), zlib=True, complevel=4, shuffle=filters == 'shuffled', chunksizes=chunk, fill_value=-32768 if kind == 'int16' else numpy.nan)
        variable.set_auto_maskandscale(False)
        if kind == 'int16':
            variable.scale_factor, variable.add_offset = 0.01, 280.0
        for day in range(0, days, chunk[0]):
            part = old['tas'][day:min(day + chunk[0], days), WRITTEN[0], WRITTEN[1]]
            values = numpy.tile(part, (1, 3, 6))[:, :shape[1], :shape[2]]
            variable[day:day + len(values)] = values if kind == 'int16' else (values * 0.01 + 280).astype('float32')
    return 'done'


def read(path, way, days):
    wall, busy = time.perf_counter(), time.process_time()
    with xarray.open_dataset(path, mask_and_scale=way == 'unpacked', decode_times=False) as data:
        values = data['tas'][:int(days), ROWS, COLUMNS].values
    times = time.perf_counter() - wall, time.process_time() - busy
    return f'{times[0]} {times[1]} {values.sum(dtype="float64")}'


print('ready', flush=True)
for line in sys.stdin:
    name, *arguments = line.split()
    print({'copy': copy, 'read': read}[name](*arguments), flush=True)
