"""Makes the small array files of this folder, and expected.json: their values as other readers print them.

    python3 make.py

Needs netCDF4, h5py, zarr (version 2 writer) and GDAL for Python, as Debian 12 packages them. The numbers are invented. The Zarr version 3 store
is written here byte by byte after the specification, so that no library of ours or theirs decides what it holds.
"""
import json, os, struct, zipfile, gzip, shutil, tempfile
import h5py, netCDF4, numpy as np, zarr, numcodecs
from osgeo import gdal, osr

here = os.path.dirname(os.path.abspath(__file__))
os.chdir(here)
rng = np.random.default_rng(7)
expected = {'tools': f'netCDF4 {netCDF4.__version__} (netCDF-C {netCDF4.getlibversion().split()[0]}), zarr {zarr.__version__}, GDAL {gdal.__version__}, numpy {np.__version__}', 'files': {}}


def plain(array):
    return [None if isinstance(v, float) and np.isnan(v) else v for v in np.asarray(array).ravel().tolist()]


def record(file, name, array, dimensions=None):
    entry = {'shape': list(np.shape(array)), 'values': plain(array)}
    if dimensions is not None:
        entry['dimensions'] = list(dimensions)
    expected['files'].setdefault(file, {})[name] = entry


def print_netcdf(file):
    data = netCDF4.Dataset(file)
    data.set_auto_maskandscale(False)
    data.set_auto_chartostring(False)
    groups = [('', data)] + [(f'{g.name}/', g) for g in data.groups.values()]
    for prefix, group in groups:
        for name, variable in group.variables.items():
            values = variable[...]
            if variable.dtype is str:
                record(file, prefix + name, np.asarray(values, dtype=object), variable.dimensions)
            elif variable.dtype.kind == 'S':
                record(file, prefix + name, netCDF4.chartostring(values), variable.dimensions)
            else:
                record(file, prefix + name, values, variable.dimensions)


# classic: several record variables whose records are padded, fixed variables, text
with netCDF4.Dataset('classic.nc', 'w', format='NETCDF3_CLASSIC') as d:
    d.title = 'invented weather'
    d.createDimension('time', None); d.createDimension('lat', 3); d.createDimension('lon', 3); d.createDimension('strlen', 6)
    t = d.createVariable('time', 'f8', ('time',)); t.units = 'days since 2021-03-01'; t.calendar = 'standard'
    v = d.createVariable('tas', 'i2', ('time', 'lat', 'lon'), fill_value=-32767); v.scale_factor = 0.01; v.add_offset = 280.0; v.units = 'K'
    v.set_auto_maskandscale(False)
    q = d.createVariable('flag', 'i1', ('time', 'lat'))
    p = d.createVariable('pr', 'f4', ('time', 'lat', 'lon')); p.units = 'mm'
    e = d.createVariable('elevation', 'f4', ('lat', 'lon')); e.valid_range = np.array([0, 4000], 'f4')
    s = d.createVariable('station', 'S1', ('lat', 'strlen')); s.long_name = 'name in \u00b0'
    t[:] = np.arange(5) + 0.5
    v[:] = rng.integers(-2000, 2000, (5, 3, 3)); q[:] = rng.integers(-3, 100, (5, 3)); p[:] = rng.gamma(1, 4, (5, 3, 3)).astype('f4'); e[:] = rng.uniform(0, 900, (3, 3))
    s[:] = netCDF4.stringtochar(np.array(['north', 'mid', 'sou th'], 'S6'))
# 64-bit offset: the only record variable has no padding between its records
with netCDF4.Dataset('single-record.nc', 'w', format='NETCDF3_64BIT_OFFSET') as d:
    d.createDimension('time', None); d.createDimension('x', 3)
    v = d.createVariable('wind', 'i2', ('time', 'x')); v[:] = rng.integers(-900, 900, (7, 3))
# 64-bit data
with netCDF4.Dataset('wide.nc', 'w', format='NETCDF3_64BIT_DATA') as d:
    d.createDimension('time', None); d.createDimension('x', 5)
    a = d.createVariable('big', 'i8', ('time', 'x')); a[:] = rng.integers(-2**52, 2**52, (4, 5)); a.range = np.array([-5, 5], 'i8')
    for name, kind in [('u8', 'u1'), ('u16', 'u2'), ('u32', 'u4'), ('u64', 'u8')]:
        b = d.createVariable(name, kind, ('x',)); b[:] = rng.integers(0, 200, 5)
# NetCDF-4: chunks that do not fit the shape, filters, groups, text, chunks never written, both byte orders
with netCDF4.Dataset('chunked.nc', 'w', format='NETCDF4') as d:
    d.Conventions = 'CF-1.8'
    d.createDimension('time', None); d.createDimension('lat', 5); d.createDimension('lon', 6); d.createDimension('nv', 2)
    t = d.createVariable('time', 'i4', ('time',), chunksizes=(4,)); t.units = 'days since 1950-01-01'; t.calendar = '365_day'
    y = d.createVariable('lat', 'f8', ('lat',)); x = d.createVariable('lon', 'f4', ('lon',)); y.units = ''
    tb = d.createVariable('time_bnds', 'f8', ('time', 'nv'), chunksizes=(4, 2))
    args = dict(zlib=True, shuffle=True, chunksizes=(3, 2, 4))
    v = d.createVariable('tas', 'i2', ('time', 'lat', 'lon'), fill_value=-32768, **args); v.scale_factor = 0.02; v.add_offset = 270.0; v.units = 'K'
    v.set_auto_maskandscale(False)
    f = d.createVariable('pr', 'f4', ('time', 'lat', 'lon'), **args); f.long_name = 'Niederschlag \u00b0\u00fc'
    g = d.createVariable('rs', 'f8', ('time', 'lat', 'lon'), zlib=True, shuffle=True, chunksizes=(4, 5, 6))
    u = d.createVariable('count', 'u2', ('time', 'lat', 'lon'), zlib=True, shuffle=True, chunksizes=(4, 5, 6))
    i = d.createVariable('code', 'i8', ('time', 'lat', 'lon'), zlib=True, shuffle=True, chunksizes=(4, 5, 6))
    n = d.createVariable('unshuffled', 'f4', ('time', 'lat', 'lon'), zlib=True, shuffle=False, chunksizes=(4, 5, 6))
    k = d.createVariable('checked', 'f4', ('time', 'lat', 'lon'), fletcher32=True, zlib=True, shuffle=True, chunksizes=(4, 5, 6))
    b = d.createVariable('big_endian', 'i4', ('time', 'lat', 'lon'), endian='big', **args)
    h = d.createVariable('holes', 'f4', ('time', 'lat', 'lon'), fill_value=-9.0, **args)
    z = d.createVariable('ps', 'i1', ('lat', 'lon')); c = d.createVariable('city', str, ('lat',)); one = d.createVariable('height', 'f8', ())
    t[:] = np.arange(7) + 100; y[:] = np.linspace(45, 43, 5); x[:] = np.linspace(350, 352.5, 6); tb[:] = np.stack([np.arange(7), np.arange(7) + 1], 1)
    shape = (7, 5, 6)
    v[:] = rng.integers(-3000, 3000, shape); f[:] = rng.gamma(1, 3, shape); f[2, 1, 1] = np.nan; g[:] = rng.normal(200, 50, shape); u[:] = rng.integers(0, 65535, shape)
    i[:] = rng.integers(-2**50, 2**50, shape); n[:] = rng.normal(0, 1, shape); k[0:4] = rng.normal(0, 1, (4, 5, 6)); b[:] = rng.integers(-10**8, 10**8, shape); h[0:2, 0:2, 0:3] = 4.5
    z[:] = rng.integers(-100, 100, (5, 6)); c[:] = np.array(['Montr\u00e9al', '', 'a', 'Arrow', '\u4e16'], dtype=object); one[...] = 2.0
    m = d.createGroup('met'); w = m.createVariable('wind', 'f4', ('time', 'lat'), chunksizes=(4, 5)); w[:] = rng.normal(3, 1, (7, 5))
for file in ['classic.nc', 'single-record.nc', 'wide.nc', 'chunked.nc']:
    print_netcdf(file)
# HDF5 with things that are left aside or refused: a linked file, a filter of its own, halves
with h5py.File('odd.h5', 'w') as d:
    d['elsewhere'] = h5py.ExternalLink('/etc/other.h5', '/x'); d['plain'] = np.arange(3.0); d['round'] = h5py.SoftLink('/')
    d.create_dataset('packed', data=np.arange(100), chunks=(10,), compression='lzf'); d.create_dataset('half', data=np.arange(4, dtype='f2'))
    d.create_dataset('outside', shape=(4,), dtype='f8', external=[('/etc/hostname', 0, h5py.h5f.UNLIMITED)])


def zip_folder(folder, target, stored=True):
    stamp = (2021, 1, 1, 0, 0, 0)
    with zipfile.ZipFile(target, 'w') as archive:
        for base, _, names in sorted(os.walk(folder)):
            for name in sorted(names):
                path = os.path.join(base, name)
                info = zipfile.ZipInfo(os.path.relpath(path, folder), stamp)
                info.compress_type = zipfile.ZIP_STORED if stored else zipfile.ZIP_DEFLATED
                archive.writestr(info, open(path, 'rb').read())


# Zarr version 2: codecs, orders, byte orders, absent chunks, text
with tempfile.TemporaryDirectory() as folder:
    root = zarr.open_group(f'{folder}/v2.zarr', 'w')
    root.attrs['title'] = 'invented'
    dims = ['time', 'lat', 'lon']
    shape = (7, 5, 6)
    kinds = {
        'blosc_zstd': ('<u2', numcodecs.Blosc('zstd', 3, numcodecs.Blosc.BITSHUFFLE), 'C'), 'blosc_lz4': ('<f4', numcodecs.Blosc('lz4'), 'C'), 'zstd': ('<f8', numcodecs.Zstd(), 'C'), 'gzip': ('<i4', numcodecs.GZip(), 'C'),
        'zlib': ('<i2', numcodecs.Zlib(), 'C'), 'lz4': ('<i8', numcodecs.LZ4(), 'C'), 'plain': ('|i1', None, 'C'), 'big_endian': ('>i4', numcodecs.Zstd(), 'C'), 'column_major': ('<f4', numcodecs.Blosc(), 'F'),
    }
    for name, (kind, codec, order) in kinds.items():
        a = root.create_dataset(name, shape=shape, chunks=(3, 2, 4), dtype=kind, compressor=codec, order=order, fill_value=None)
        a[:] = rng.integers(0, 100, shape); a.attrs['_ARRAY_DIMENSIONS'] = dims
    a = root.create_dataset('absent', shape=shape, chunks=(3, 2, 4), dtype='<u2', fill_value=65535); a[0:3, 0:2, 0:4] = 7; a.attrs['_ARRAY_DIMENSIONS'] = dims; a.attrs['scale_factor'] = 0.5
    a = root.create_dataset('nan_fill', shape=(6,), chunks=(3,), dtype='<f4', fill_value=np.nan); a[0:3] = [1, 2, 3]; a.attrs['_ARRAY_DIMENSIONS'] = ['lon']
    a = root.create_dataset('nested/place', shape=(5,), chunks=(2,), dtype='<f8', fill_value=0); a[:] = [1, 2, 0, 4, 5]; a.attrs['_ARRAY_DIMENSIONS'] = ['lat']
    a = root.create_dataset('site', shape=(3,), chunks=(2,), dtype=object, object_codec=numcodecs.VLenUTF8()); a[:] = ['A1', '\u00d1o\u00f1o', '']; a.attrs['_ARRAY_DIMENSIONS'] = ['site']
    a = root.create_dataset('fixed', shape=(3,), chunks=(3,), dtype='<U4'); a[:] = ['x', 'yy', '\u00e9z']
    zarr.consolidate_metadata(f'{folder}/v2.zarr')
    zip_folder(folder, 'version2.zarr.zip', stored=False)
    def visit(path, a):
        if isinstance(a, zarr.Array):
            record('version2.zarr.zip', path, a[...])
    root.visititems(visit)


def crc32c(data):
    value = 0xFFFFFFFF
    for byte in data:
        value ^= byte
        for _ in range(8):
            value = (value >> 1) ^ (0x82F63B78 if value & 1 else 0)
    return value ^ 0xFFFFFFFF


# Zarr version 3, after the core specification: regular and sharded, both byte orders, absent chunks, gzip
with tempfile.TemporaryDirectory() as folder:
    def put(path, content):
        path = os.path.join(folder, path); os.makedirs(os.path.dirname(path), exist_ok=True)
        open(path, 'wb').write(content if isinstance(content, bytes) else json.dumps(content).encode())
    def meta(shape, chunk, kind, codecs, fill, names=None, **more):
        return dict(zarr_format=3, node_type='array', shape=shape, data_type=kind, chunk_grid=dict(name='regular', configuration=dict(chunk_shape=chunk)), chunk_key_encoding=dict(name='default', configuration=dict(separator='/')), codecs=codecs, fill_value=fill, dimension_names=names, attributes=more)
    def raw(endian): return dict(name='bytes', configuration=dict(endian=endian))
    put('zarr.json', dict(zarr_format=3, node_type='group', attributes=dict(title='invented 3')))
    def chunks(values, chunk):
        for i in range(-(-values.shape[0] // chunk[0])):
            for j in range(-(-values.shape[1] // chunk[1])):
                block = np.zeros(chunk, values.dtype); part = values[i * chunk[0]:(i + 1) * chunk[0], j * chunk[1]:(j + 1) * chunk[1]]
                block[:part.shape[0], :part.shape[1]] = part
                yield i, j, block
    values = rng.integers(-500, 500, (5, 6)).astype('<i2')
    put('little/zarr.json', meta([5, 6], [2, 4], 'int16', [raw('little'), dict(name='gzip', configuration=dict(level=5))], 0, ['lat', 'lon'], units='K'))
    for i, j, block in chunks(values, (2, 4)): put(f'little/c/{i}/{j}', gzip.compress(block.tobytes(), mtime=0))
    record('version3.zarr.zip', 'little', values, ['lat', 'lon'])
    values = rng.normal(0, 1, (5, 6)).astype('>f4')
    put('big/zarr.json', meta([5, 6], [2, 4], 'float32', [raw('big')], 'NaN', ['lat', None]))
    for i, j, block in chunks(values, (2, 4)):
        if (i, j) != (1, 1): put(f'big/c/{i}/{j}', block.tobytes())
    values = values.astype('f4'); values[2:4, 4:6] = np.nan
    record('version3.zarr.zip', 'big', values)
    values = rng.integers(0, 2**31, (4, 8)).astype('<u4')
    inner = [raw('little')]
    put('sharded/zarr.json', meta([4, 8], [4, 4], 'uint32', [dict(name='sharding_indexed', configuration=dict(chunk_shape=[2, 2], codecs=inner, index_codecs=[raw('little'), dict(name='crc32c')], index_location='end'))], 9, ['lat', 'x']))
    for j in range(2):
        body, index = b'', b''
        for bi in range(2):
            for bj in range(2):
                if (j, bi, bj) == (1, 1, 0):
                    index += struct.pack('<QQ', 2**64 - 1, 2**64 - 1); values[2:4, 4:6] = 9; continue
                block = values[bi * 2:bi * 2 + 2, j * 4 + bj * 2:j * 4 + bj * 2 + 2].tobytes()
                index += struct.pack('<QQ', len(body), len(block)); body += block
        put(f'sharded/c/0/{j}', body + index + struct.pack('<I', crc32c(index)))
    record('version3.zarr.zip', 'sharded', values, ['lat', 'x'])
    put('long/zarr.json', meta([3], [2], 'int64', [raw('little')], 0, ['n'])); put('long/c/0', np.array([-5, 2**40], '<i8').tobytes())
    record('version3.zarr.zip', 'long', np.array([-5, 2**40, 0]), ['n'])
    put('odd/zarr.json', meta([2], [2], 'float16', [raw('little')], 0, ['n'])); put('odd/c/0', b'\0\0\0\0')
    put('packed/zarr.json', meta([2], [2], 'int16', [raw('little'), dict(name='unheard-of', configuration={})], 0, ['n'])); put('packed/c/0', b'\0\0\0\0')
    zip_folder(folder, 'version3.zarr.zip')

# GeoTIFF: registration by area and by point, packed bands, a turned image
def tif(name, transform, crs, bands, options, point=False):
    rows, columns = bands[0].shape
    data = gdal.GetDriverByName('GTiff').Create(name, columns, rows, len(bands), gdal.GDT_Int16 if bands[0].dtype.kind == 'i' else gdal.GDT_Float32, options)
    if point: data.SetMetadataItem('AREA_OR_POINT', 'Point')
    data.SetGeoTransform(transform)
    reference = osr.SpatialReference(); reference.ImportFromEPSG(crs); data.SetProjection(reference.ExportToWkt())
    for k, values in enumerate(bands):
        band = data.GetRasterBand(k + 1); band.WriteArray(values)
        if not point:
            band.SetNoDataValue(-999); band.SetScale(0.1); band.SetOffset(5); band.SetDescription(f'2021-03-0{k + 1}'); band.SetUnitType('mm & more')
    data = None
    data = gdal.Open(name); g = data.GetGeoTransform()
    for k in range(data.RasterCount): record(name, f'band_{k + 1}', data.GetRasterBand(k + 1).ReadAsArray(), ['y', 'x'])
    c, r = np.meshgrid(np.arange(columns) + 0.5, np.arange(rows) + 0.5)
    x, y = g[0] + c * g[1] + r * g[2], g[3] + c * g[4] + r * g[5]
    turned = g[2] != 0
    record(name, 'x', x if turned else x[0]); record(name, 'y', y if turned else y[:, 0])

tif('area.tif', (500000, 30, 0, 4500000, 0, -20), 32633, [rng.integers(-999, 999, (20, 33)).astype('i2') for _ in range(2)], ['TILED=YES', 'BLOCKXSIZE=16', 'BLOCKYSIZE=16', 'COMPRESS=DEFLATE', 'PREDICTOR=2'])
tif('point.tif', (10, 0.25, 0, 45, 0, -0.5), 4326, [rng.normal(0, 1, (6, 5)).astype('f4')], ['COMPRESS=LZW'], point=True)
tif('turned.tif', (500000, 30, 5, 4500000, 4, -20), 32633, [rng.normal(0, 1, (6, 5)).astype('f4')], [])
for leftover in os.listdir('.'):
    if leftover.endswith('.aux.xml'): os.remove(leftover)
json.dump(expected, open('expected.json', 'w'), ensure_ascii=False, separators=(',', ':'))
print(expected['tools'])
