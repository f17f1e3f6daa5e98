import { describe, expect, test } from 'vitest';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import { feature, featureFile, importContext } from '../support/import-context.ts';

async function canals(features: readonly unknown[], options: ImportOptions = {}) {
  const reading = await readImport('canals', [featureFile(features)], options, importContext());
  if (reading.staged.kind !== 'canals') throw new Error('not canals');
  return { ...reading, reaches: reading.staged.reaches };
}

const line = (properties: unknown, ...coordinates: number[][]) => feature(properties, 'LineString', coordinates);
const reach = (code: string, parent: string | null, at = 0) => line({ reach: code, parent }, [at, 0], [at + 0.01, 0]);
const errors = (reading: { findings: readonly { severity: string; code: string; message: string }[] }) =>
  reading.findings.filter(({ severity }) => severity === 'error');

describe('canals', () => {
  test('capacity in the unit of its header, length on the ellipsoid', async () => {
    // a degree of the WGS 84 equator is 111 319.491 m
    const { reaches } = await canals([line({ Reach: 'M', parent: null, capacity_cfs: 100, kind: 'Main' }, [0, 0, 9], [1, 0, 8])]);
    expect(reaches[0]).toMatchObject({
      code: 'M',
      name: 'M',
      parentCode: null,
      kind: 'main',
      lossRule: { kind: 'none' },
      geometry: {
        type: 'LineString',
        coordinates: [
          [0, 0],
          [1, 0],
        ],
      },
    });
    expect(reaches[0].length).toBeCloseTo(111319.491, 3);
    expect(reaches[0].capacity).toBeCloseTo(2.8316846592, 9);
  });

  test('loss rules', async () => {
    const rules = [
      { loss_rule: 'none' },
      { loss_rule: 'fraction_per_km', loss_value: 0.02 },
      { loss_rule: 'efficiency', loss_value: '0.9' },
      { loss_rule: 'seepage_mm_d', loss_value: 250, wetted_perimeter_m: 6 },
      { loss_rule: 'seepage_mm_d', loss_value: 250 },
      { loss_rule: 'magic', loss_value: 1 },
      { loss_rule: 'efficiency', loss_value: 90 },
    ];
    const { reaches, findings } = await canals(
      rules.map((rule, i) => line({ reach: `r${i}`, parent: i === 0 ? null : 'r0', ...rule }, [i, 0], [i + 0.01, 0])),
    );
    expect(reaches.map(({ lossRule }) => lossRule)).toEqual([
      { kind: 'none' },
      { kind: 'fraction-per-km', fraction: 0.02 },
      { kind: 'efficiency', efficiency: 0.9 },
      { kind: 'seepage', rate: 250, wettedPerimeter: 6 },
      { kind: 'none' },
      { kind: 'none' },
      { kind: 'none' },
    ]);
    expect(findings.filter(({ code }) => code === 'bad-loss-rule').map(({ row }) => row)).toEqual([5, 6, 7]);
  });

  test('what is no tree is refused by name', async () => {
    expect(errors(await canals([reach('a', null), reach('b', 'z')]))).toMatchObject([
      { code: 'orphan-reach', message: expect.stringContaining('Reach b hangs on reach z') },
    ]);
    expect(errors(await canals([reach('h', null), reach('a', 'b'), reach('b', 'a')]))).toMatchObject([
      { code: 'reach-cycle', message: expect.stringContaining('a, b') },
    ]);
    expect(errors(await canals([reach('a', null), reach('b', null)]))).toMatchObject([{ code: 'several-heads' }]);
    expect(errors(await canals([reach('a', 'b'), reach('b', 'a')])).map(({ code }) => code)).toEqual(['reach-cycle', 'no-head']);
    expect((await canals([reach('a', null), reach('b', 'z')])).reaches).toEqual([]);
  });

  test('a duplicate and a line without length are left out', async () => {
    const reading = await canals([reach('a', null), reach('a', null, 1), line({ reach: 'c', parent: 'a' }, [2, 0], [2, 0])]);
    expect(errors(reading).map(({ code }) => code)).toEqual(['duplicate-code', 'zero-length']);
    expect(reading.reaches.map(({ code }) => code)).toEqual(['a']);
  });

  test('without a parent column the tree follows lines that touch within five metres', async () => {
    // 1e-5 degrees of longitude at the equator is 1.1 m; 1e-4 is 11 m
    const near = await canals([
      line({ reach: 'main' }, [0, 0], [0.01, 0]),
      line({ reach: 'north' }, [0.01001, 0], [0.01, 0.01]),
      line({ reach: 'tail' }, [0.01, 0.01], [0.02, 0.01]),
    ]);
    expect(near.reaches.map(({ code, parentCode }) => [code, parentCode])).toEqual([
      ['main', null],
      ['north', 'main'],
      ['tail', 'north'],
    ]);
    expect(near.findings.map(({ code }) => code)).toContain('tree-inferred');
    const apart = await canals([line({ reach: 'main' }, [0, 0], [0.01, 0]), line({ reach: 'far' }, [0.0101, 0], [0.02, 0])]);
    expect(errors(apart)).toMatchObject([{ code: 'several-heads' }]);
  });
});
