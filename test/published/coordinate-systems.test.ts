/**
 * Coordinate systems and areas against PROJ and GeographicLib.
 *
 * Positions: pyproj 3.4.1 on PROJ 9.1.1 (EPSG dataset 10.076), the inverse projection followed by the best transformation to WGS 84 that needs
 * no grid-shift file, within the area of use. Areas: `Geod.polygon_area_perimeter` of the same pyproj.
 */
import type { Polygon } from 'geojson';
import { describe, expect, test } from 'vitest';
import { isCrsFault, type Projection, projectionOf } from '../../lib/files/crs.ts';
import { geodesicArea, geodesicDistance } from '../../lib/geo/geodesic.ts';
import { repairPolygon } from '../../lib/geo/polygon-repair.ts';
import { readLayer, vectorFile } from '../support/vector-files.ts';

/** Largest distance from PROJ that is allowed [m]. */
const NEAR = 0.5;
/** Largest relative error of an area: 0.01 %. */
const AREA_ERROR = 1e-4;

function projection(text: string): Projection {
  const found = projectionOf(text);
  if (isCrsFault(found)) throw new Error(found.message);
  return found;
}

/** EPSG code, name, easting or longitude, northing or latitude, longitude and latitude on WGS 84. */
const SYSTEMS: [code: number, name: string, x: number, y: number, longitude: number, latitude: number][] = [
  [28992, 'Amersfoort / RD New', 87050.6532, 405482.5107, 4.405705429, 51.634074775],
  [2193, 'NZGD2000 / New Zealand Transverse Mercator 2000', 1360794.5588, 5194862.6478, 170.048, -43.361],
  [3763, 'ETRS89 / Portugal TM06', -36272.9312, -128171.5913, -8.549, 38.513],
  [3035, 'ETRS89-extended / LAEA Europe', 2582718.1977, 2420852.0887, -11.457, 42.639],
  [32635, 'WGS 84 / UTM zone 35N', 379099.428, 2787632.8792, 25.8, 25.2],
  [26910, 'NAD83 / UTM zone 10N', 407176.9042, 5085633.3606, -124.197, 45.918],
  [27700, 'OSGB36 / British National Grid', 152699.1753, 365400.657, -5.698010447, 53.128246626],
  [2056, 'CH1903+ / LV95', 2590730.3598, 1140494.7273, 7.318076795, 46.415740198],
  [21781, 'CH1903 / LV03', 590730.3598, 140494.7273, 7.318076795, 46.415740198],
  [31467, 'DHDN / 3-degree Gauss-Kruger zone 3', 3456863.0655, 5497745.0363, 8.402050641, 49.614895187],
  [2154, 'RGF93 v1 / Lambert-93', 158834.9019, 6375939.4554, -3.788, 44.273],
  [3003, 'Monte Mario / Italy zone 1', 1392887.9523, 4393394.7301, 7.750664682, 39.683596932],
  [25830, 'ETRS89 / UTM zone 30N', 412149.9151, 5409137.6229, -4.197, 48.829],
  [23030, 'ED50 / UTM zone 30N', 412145.751, 5409244.6688, -4.198417851, 48.828007844],
  [4258, 'ETRS89', 0.784, 48.435, 0.784, 48.435],
  [4269, 'NAD83', -146.864, 36.379, -146.864, 36.379],
  [4267, 'NAD27', -148.967, 29.956, -148.968455937, 29.955935985],
  [26711, 'NAD27 / UTM zone 11N', 401067.9253, 4682458.5952, -118.201012157, 42.289928655],
  [2229, 'NAD83 / California zone 5 (ftUS)', 6187414.0612, 1706395.9525, -119.23, 33.675],
  [6414, 'NAD83(2011) / California Albers', -122634.4544, -292782.6113, -121.351, 35.374],
  [28355, 'GDA94 / MGA zone 55', 395466.7209, 5750012.1227, 145.803, -38.392],
  [7856, 'GDA2020 / MGA zone 56', 406136.8038, 4968246.6346, 151.8, -45.433],
  [31983, 'SIRGAS 2000 / UTM zone 23S', 376051.2636, 7576539.6277, -46.2, -21.911],
  [24879, 'PSAD56 / UTM zone 19S', 385541.9861, 6559532.1247, -70.202218741, -31.095397594],
  [21037, 'Arc 1960 / UTM zone 37S', 354602.8023, 9090671.1619, 37.680844527, -8.226978876],
  [32735, 'WGS 84 / UTM zone 35S', 425160.6692, 3793270.6443, 25.8, -56.0],
  [2048, 'Hartebeesthoek94 / Lo19', 38065.597, 3645058.2717, 18.593, -32.93],
  [22234, 'Cape / UTM zone 34S', 519598.342, 7322399.3764, 21.192492729, -24.213663242],
  [3857, 'WGS 84 / Pseudo-Mercator', -8015003.3371, -4032025.0952, -72.0, -34.024],
  [5070, 'NAD83 / Conus Albers', -1073265.0169, 1045350.1995, -107.426, 31.901],
  [3067, 'ETRS89 / TM35FIN(E,N)', 283391.4994, 6905104.7265, 22.833, 62.215],
  [2180, 'ETRF2000-PL / CS92', 369960.2742, 358551.5823, 17.143, 51.079],
  [31256, 'MGI / Austria GK East', -60598.9994, 240154.6196, 15.530977687, 47.297577051],
  [5514, 'S-JTSK / Krovak East North', -704430.2122, -1200535.7184, 15.229893472, 48.728464312],
  [3826, 'TWD97 / TM2 zone 121', 209920.703, 2467157.2712, 120.611, 22.303],
  [2443, 'JGD2000 / Japan Plane Rectangular CS I', -62469.5442, -410679.6843, 128.857, 29.294],
  [24378, 'Kalianpur 1975 / India zone I', 3294733.9433, 680363.4288, 73.736199079, 30.252855828],
  [32645, 'WGS 84 / UTM zone 45N', 379099.428, 2787632.8792, 85.8, 25.2],
  [29902, 'TM65 / Irish Grid', 120670.4594, 150717.0116, -9.171584259, 52.60232062],
  [6677, 'JGD2011 / Japan Plane Rectangular CS IX', -58668.4387, -453345.8505, 139.213, 31.911],
  [5880, 'SIRGAS 2000 / Brazil Polyconic', 4446957.3335, 7458078.7759, -59.391, -22.885],
  [22185, 'POSGAR 94 / Argentina 5', 5444155.0814, 6198980.6287, -60.607, -34.353],
  [2326, 'Hong Kong 1980 Grid System', 816743.5814, 813863.208, 113.987446583, 22.263473303],
  [4674, 'SIRGAS 2000', -93.117, -32.093, -93.117, -32.093],
];

describe('positions of PROJ', () => {
  for (const [code, name, x, y, longitude, latitude] of SYSTEMS) {
    test(`EPSG:${code} ${name}`, () => {
      const { toWgs84, name: told } = projection(`EPSG:${code}`);
      expect(told).toBe(`EPSG:${code} ${name}`);
      const [east, north] = toWgs84 ? toWgs84(x, y) : [x, y];
      expect(geodesicDistance(east, north, longitude, latitude)).toBeLessThan(NEAR);
    });
  }
});

const DEGREES = 'PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]';
const AMERSFOORT = `GEOGCS["GCS_Amersfoort",DATUM["D_Amersfoort",SPHEROID["Bessel_1841",6377397.155,299.1528128]],${DEGREES}]`;
const NAD27 = `GEOGCS["GCS_North_American_1927",DATUM["D_North_American_1927",SPHEROID["Clarke_1866",6378206.4,294.9786982]],${DEGREES}]`;
const NAD83 = `GEOGCS["GCS_North_American_1983",DATUM["D_North_American_1983",SPHEROID["GRS_1980",6378137.0,298.257222101]],${DEGREES}]`;

function rowOf(code: number): [number, number, number, number] {
  const [, , x, y, longitude, latitude] = SYSTEMS.find(([own]) => own === code) as (typeof SYSTEMS)[number];
  return [x, y, longitude, latitude];
}

/** The same systems as the .prj file of a shapefile has them: without a code. */
const WKT_TEXTS: [name: string, text: string, code: number][] = [
  [
    'oblique stereographic on Bessel',
    `PROJCS["RD_New",${AMERSFOORT},PROJECTION["Double_Stereographic"],PARAMETER["False_Easting",155000.0],PARAMETER["False_Northing",463000.0],PARAMETER["Central_Meridian",5.38763888888889],PARAMETER["Scale_Factor",0.9999079],PARAMETER["Latitude_Of_Origin",52.15616055555555],UNIT["Meter",1.0]]`,
    28992,
  ],
  [
    'conic in US survey feet',
    `PROJCS["State_Plane",${NAD83},PROJECTION["Lambert_Conformal_Conic"],PARAMETER["False_Easting",6561666.666666666],PARAMETER["False_Northing",1640416.666666667],PARAMETER["Central_Meridian",-118.0],PARAMETER["Standard_Parallel_1",34.03333333333333],PARAMETER["Standard_Parallel_2",35.46666666666667],PARAMETER["Latitude_Of_Origin",33.5],UNIT["Foot_US",0.3048006096012192]]`,
    2229,
  ],
  ['geographic, shifted by translations', NAD27, 4267],
];

describe('systems told by WKT alone', () => {
  for (const [name, text, code] of WKT_TEXTS) {
    test(name, () => {
      const [x, y, longitude, latitude] = rowOf(code);
      const [east, north] = projection(text).toWgs84?.(x, y) ?? [Number.NaN, Number.NaN];
      expect(geodesicDistance(east, north, longitude, latitude)).toBeLessThan(NEAR);
    });
  }
});

/** A pentagon of about six hectares with its first corner at 10.1° E. */
function pentagon(latitude: number): Polygon {
  const [x, y] = [10.1, latitude];
  return {
    type: 'Polygon',
    coordinates: [
      [
        [x, y],
        [x + 0.0031, y + 0.0002],
        [x + 0.0034, y + 0.0015],
        [x + 0.0015, y + 0.0023],
        [x - 0.0004, y + 0.0016],
        [x, y],
      ],
    ],
  };
}

const AREAS: [latitude: number, area: number][] = [
  [0, 79147.3334],
  [25, 71902.9863],
  [38.5, 62262.9838],
  [52, 49134.3994],
  [-43, 58247.9414],
];

describe('ellipsoidal areas', () => {
  for (const [latitude, area] of AREAS) {
    test(`latitude ${latitude}`, () => {
      expect(Math.abs(geodesicArea(pentagon(latitude)) / area - 1)).toBeLessThan(AREA_ERROR);
      expect(Math.abs(repairPolygon(pentagon(latitude)).area / area - 1)).toBeLessThan(AREA_ERROR);
    });
  }
});

/** First corner on WGS 84 and area [m²] of the first parcels of each file: ogr2ogr (GDAL 3.6.2) or pyproj to WGS 84, then pyproj's Geod. */
const FILES: [file: string, parcels: [longitude: number, latitude: number, area: number][]][] = [
  [
    'nl-parcels.gpkg',
    [
      [4.561159947, 52.097383039, 157.924],
      [4.559827407, 52.113000787, 968.887],
      [4.579326537, 52.115831246, 22428.407],
      [4.577256121, 52.118827975, 10.551],
      [4.57935145, 52.119122788, 1069.226],
    ],
  ],
  [
    'nz-irrigated.zip',
    [
      [168.758428937, -45.032686342, 75163.498],
      [168.753482527, -45.032727306, 240142.138],
      [168.752632363, -45.037356113, 141861.076],
      [168.752265246, -45.034065466, 30858.931],
      [168.741812091, -45.033464663, 115259.377],
      [168.753704003, -45.054372507, 273928.601],
      [168.753827447, -45.054316927, 1321751.886],
      [168.749531752, -45.084672636, 569225.78],
    ],
  ],
  [
    'it-parcels.parquet',
    [
      [12.116759476, 43.622158748, 1033.863],
      [12.095025823, 43.625346302, 821.438],
      [11.635275101, 43.624319359, 2200.866],
      [11.932972126, 43.179458575, 551.192],
    ],
  ],
];

describe('parcels of projected files', () => {
  for (const [file, parcels] of FILES) {
    test(file, async () => {
      const { features } = await readLayer(vectorFile(file));
      for (const [index, [longitude, latitude, area]] of parcels.entries()) {
        const geometry = features[index].geometry as Polygon;
        const distances = cornersOf(geometry.coordinates).map(([x, y]) => geodesicDistance(x, y, longitude, latitude));
        expect(Math.min(...distances)).toBeLessThan(NEAR);
        expect(Math.abs(geodesicArea(geometry) / area - 1)).toBeLessThan(AREA_ERROR);
      }
    });
  }
});

function cornersOf(coordinates: unknown): number[][] {
  const list = coordinates as unknown[];
  return typeof list[0] === 'number' ? [list as number[]] : list.flatMap(cornersOf);
}
