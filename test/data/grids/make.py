"""Makes the files of this folder: our own numbers, no observations (CC0). Run with Debian's python3-gdal, python3-netcdf4 and python3-numpy.

The numbers printed at the end are what GDAL and xarray read back; the tests hold them.
"""
import os, tempfile, zipfile
import numpy as np
from osgeo import gdal, osr
import netCDF4

gdal.UseExceptions()

def tif(path, array, origin, cell, epsg, nodata=None, scale=None, description=None, kind=gdal.GDT_Int16):
    rows, columns = array.shape
    out = gdal.GetDriverByName('GTiff').Create(path, columns, rows, 1, kind, ['COMPRESS=DEFLATE'])
    out.SetGeoTransform([origin[0], cell, 0, origin[1], 0, -cell])
    system = osr.SpatialReference()
    system.ImportFromEPSG(epsg)
    out.SetProjection(system.ExportToWkt())
    band = out.GetRasterBand(1)
    if nodata is not None: band.SetNoDataValue(nodata)
    if scale is not None: band.SetScale(scale); band.SetUnitType('degC')
    if description: band.SetDescription(description)
    band.WriteArray(array)
    out = None

folder = tempfile.mkdtemp()
row, column = np.mgrid[0:5, 0:6]
for day, name in enumerate(['tmax_20240229.tif', 'tmax_20240301.tif']):
    values = 100 + 10 * row + column + 50 * day
    values[4, 5] = -9999
    tif(os.path.join(folder, name), values.astype('int16'), (500000, 5000000), 10000, 32633, -9999, 0.1)
r, c = np.mgrid[0:60, 0:80]
tif(os.path.join(folder, 'elevation.tif'), (200 + 5 * r + 3 * c).astype('int16'), (14.8, 45.4), 0.0125, 4326)
with zipfile.ZipFile('series.zip', 'w', zipfile.ZIP_DEFLATED) as archive:
    for name in sorted(os.listdir(folder)): archive.write(os.path.join(folder, name), f'days/{name}')

# two years' ends of a packed field, latitude ascending, longitudes 0 to 360 over the seam, time bounds, in two files of different formats
for name, format, start, days in [('packed-2019.nc', 'NETCDF4', 43828, 3), ('packed-2020.nc', 'NETCDF3_CLASSIC', 43831, 2)]:
    out = netCDF4.Dataset(name, 'w', format=format)
    for dimension, length in [('time', None), ('lat', 4), ('lon', 8), ('bnds', 2)]: out.createDimension(dimension, length)
    time = out.createVariable('time', 'f8', ('time',)); time.units = 'days since 1900-01-01'; time.bounds = 'time_bnds'
    bounds = out.createVariable('time_bnds', 'f8', ('time', 'bnds'))
    lat = out.createVariable('lat', 'f4', ('lat',)); lat.units = 'degrees_north'; lat[:] = [50.1, 50.3, 50.5, 50.7]
    lon = out.createVariable('lon', 'f4', ('lon',)); lon.units = 'degrees_east'; lon[:] = np.arange(8) * 45.0
    options = dict(zlib=True, chunksizes=(1, 2, 4)) if format == 'NETCDF4' else {}
    rsds = out.createVariable('rsds', 'i2', ('time', 'lat', 'lon'), fill_value=-32767, **options)
    rsds.units = 'W m-2'; rsds.scale_factor = 0.02; rsds.add_offset = 300.0; rsds.standard_name = 'surface_downwelling_shortwave_flux_in_air'
    rsds.set_auto_maskandscale(False)
    for day in range(days):
        time[day] = start + day + 1
        bounds[day] = [start + day, start + day + 1]
        t, y, x = day + (3 if days == 2 else 0), np.arange(4)[:, None], np.arange(8)[None, :]
        values = -9000 + 1000 * t + 300 * y + 7 * x
        values[0, 3] = -32767
        rsds[day] = values.astype('i2')
    out.close()

import xarray
for name in ['packed-2019.nc', 'packed-2020.nc']:
    field = xarray.open_dataset(name, decode_times=False).rsds
    print(name, 'W m-2', [float(field[0, 0, 0]), float(field[1, 2, 7]), float(field[-1, 3, 1]), float(field[0, 0, 3])])
