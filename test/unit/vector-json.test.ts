import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { featureSpans } from '../../lib/files/json-features.ts';
import { feature, featureFile, square, textFile } from '../support/import-context.ts';
import { readLayer } from '../support/vector-files.ts';

function parts(text: string, limit = 1000): { elements: unknown[]; frame: unknown } | string | null {
  const bytes = Buffer.from(text);
  const found = featureSpans(bytes, limit);
  if (found === null || typeof found === 'string') return found;
  const elements = Array.from({ length: found.count }, (_, k) =>
    JSON.parse(bytes.toString('utf-8', found.spans[2 * k], found.spans[2 * k + 1])),
  );
  return { elements, frame: JSON.parse(found.frame) };
}

describe('members of a large JSON text', () => {
  test('any object with features comes apart into its elements and the rest, as the whole parser sees it', () => {
    const element = fc.jsonValue({ maxDepth: 4 });
    fc.assert(
      fc.property(fc.array(element), fc.dictionary(fc.string(), element), fc.constantFrom(undefined, 1, '\t'), (features, rest, indent) => {
        const { features: _features, ...others } = rest as Record<string, unknown>;
        const text = JSON.stringify({ ...others, features, tail: 'x' }, null, indent);
        expect(parts(text)).toEqual({
          elements: features.map((item) => JSON.parse(JSON.stringify(item))),
          frame: { ...JSON.parse(JSON.stringify(others)), features: [], tail: 'x' },
        });
      }),
      { seed: 7, numRuns: 200 },
    );
  });

  test('brackets, quotes and the word features inside texts and deeper objects are no members', () => {
    const value = { name: 'a "features": [1] \\', nested: { features: [9] }, features: [{ t: ']},[' }, '\\"', { features: [1] }] };
    expect(parts(JSON.stringify(value))).toMatchObject({ elements: value.features, frame: { nested: { features: [9] } } });
    expect(parts('{"nested":{"features":[1]}}')).toBeNull();
    expect(parts('[{"features":[1]}]')).toBeNull();
  });

  test('more elements than the limit are seen without keeping them', () => {
    expect(parts('{"features":[1,2,3]}', 3)).toMatchObject({ elements: [1, 2, 3] });
    expect(parts('{"features":[1,2,3,4]}', 3)).toBe('too-many');
    expect(parts(`{"features":[${','.repeat(50_000)}`, 3)).toBe('too-many');
  });

  test('nesting past the limit is seen wherever it is', () => {
    expect(parts(`{"features":[${'['.repeat(80)}${']'.repeat(80)}]}`)).toBe('too-deep');
    expect(parts(`{"a":${'['.repeat(80)}${']'.repeat(80)},"features":[]}`)).toBe('too-deep');
  });
});

const good = JSON.stringify(feature({}, 'Polygon', [square(10, 45)]));

/** Faults of JSON inside and around the features: none may stage a part of the file. */
const BROKEN: [string, string][] = [
  ['a trailing comma', `{"type":"FeatureCollection","features":[${good},]}`],
  ['a doubled comma', `{"type":"FeatureCollection","features":[${good},,${good}]}`],
  ['a missing comma', `{"type":"FeatureCollection","features":[${good} ${good}]}`],
  ['a comma before the first', `{"type":"FeatureCollection","features":[,${good}]}`],
  ['closed by the wrong bracket', `{"type":"FeatureCollection","features":[${good}}`],
  ['cut after a feature', `{"type":"FeatureCollection","features":[${good}`],
  ['cut inside a feature', `{"type":"FeatureCollection","features":[${good},${good.slice(0, 40)}`],
  ['text behind the end', `{"type":"FeatureCollection","features":[${good}]} x`],
  ['a fault in a late feature', `{"type":"FeatureCollection","features":[${good},{"type":Feature}]}`],
  ['a fault behind the features', `{"type":"FeatureCollection","features":[${good}],"a":}`],
];

describe('broken JSON is refused as a whole', () => {
  for (const [name, text] of BROKEN) {
    test(name, async () => {
      const { codes, features, fatal } = await readLayer(textFile(text, 'x.geojson'));
      expect(codes).toEqual(['not-json']);
      expect(features).toEqual([]);
      expect(fatal).toBe(true);
    });
  }

  test('JSON in UTF-16 is read', async () => {
    const text = `\uFEFF{"type":"FeatureCollection","features":[${good}]}`;
    expect((await readLayer({ name: 'x.geojson', bytes: new Uint8Array(Buffer.from(text, 'utf16le')) })).features).toHaveLength(1);
  });
});

test('a collection of polygons is one multipolygon; a mixed one is of the wrong type', async () => {
  const polygon = { type: 'Polygon', coordinates: [square(10, 45)] };
  const multi = { type: 'MultiPolygon', coordinates: [[square(11, 45)]] };
  const point = { type: 'Point', coordinates: [1, 2] };
  const collection = (...geometries: unknown[]) => ({
    type: 'Feature',
    properties: {},
    geometry: { type: 'GeometryCollection', geometries },
  });
  const { features, codes } = await readLayer(featureFile([collection(polygon, multi), collection(polygon, point), collection(null)]));
  expect(features[0].geometry).toEqual({ type: 'MultiPolygon', coordinates: [[square(10, 45)], [square(11, 45)]] });
  expect(features.slice(1).map(({ geometry }) => geometry)).toEqual([null, null]);
  expect(codes).toEqual(['wrong-geometry', 'wrong-geometry']);
});

test('the id of a feature is a property, unless it has one of that name', async () => {
  const own = { ...(feature({ id: 'b' }, 'Polygon', [square(10, 45)]) as object), id: 'a' };
  const outer = { ...(feature({ x: 1 }, 'Polygon', [square(11, 45)]) as object), id: 7 };
  const { features } = await readLayer(featureFile([own, outer]));
  expect(features.map(({ properties }) => properties)).toEqual([{ id: 'b' }, { id: 7, x: 1 }]);
});
