import { describe, expect, test } from 'vitest';
import { type ImportOptions, readImport } from '../../lib/files/read-import.ts';
import type { ImportContext } from '../../lib/files/reading.ts';
import { feature, featureFile, importContext } from '../support/import-context.ts';

async function canals(features: readonly unknown[], options: ImportOptions = {}, over: Partial<ImportContext> = {}) {
  const reading = await readImport('canals', [featureFile(features)], options, importContext(over));
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
      { loss_rule: 'efficiency', loss_value: 90 },
      { loss_rule: 'efficiency', loss_value: 100 },
      { loss_rule: 'fraction_per_km', loss_value: 0.7 },
      {},
    ];
    const { reaches, findings } = await canals(
      rules.map((rule, i) => line({ reach: `r${i}`, parent: i === 0 ? null : 'r0', ...rule }, [i, 0], [i + 0.01, 0])),
    );
    expect(reaches.map(({ lossRule }) => lossRule)).toEqual([
      { kind: 'none' },
      { kind: 'fraction-per-km', fraction: 0.02 },
      { kind: 'efficiency', efficiency: 0.9 },
      { kind: 'seepage', rate: 250, wettedPerimeter: 6 },
      { kind: 'efficiency', efficiency: 0.9 },
      { kind: 'efficiency', efficiency: 1 },
      { kind: 'fraction-per-km', fraction: 0.7 },
      { kind: 'none' },
    ]);
    expect(findings).toMatchObject([
      { severity: 'note', code: 'efficiency-percent', message: 'The efficiency of 2 reaches is above 1 and read as percent.' },
    ]);
  });

  test.each([
    ['an unknown rule', { loss_rule: 'magic', loss_value: 1 }, 'loss_rule'],
    ['a value without a rule', { loss_value: 0.1 }, 'loss_rule'],
    ['a rule without a value', { loss_rule: 'efficiency' }, 'loss_value'],
    ['a fraction of 1 per km', { loss_rule: 'fraction_per_km', loss_value: 1 }, 'loss_value'],
    ['a fraction below nothing', { loss_rule: 'fraction_per_km', loss_value: -0.1 }, 'loss_value'],
    ['an efficiency of 101', { loss_rule: 'efficiency', loss_value: 101 }, 'loss_value'],
    ['an efficiency of nothing', { loss_rule: 'efficiency', loss_value: 0 }, 'loss_value'],
    ['a text for a value', { loss_rule: 'efficiency', loss_value: 'high' }, 'loss_value'],
    ['seepage without a wetted perimeter', { loss_rule: 'seepage_mm_d', loss_value: 250 }, 'wetted_perimeter'],
  ])('a loss that cannot be used leaves the reach out: %s', async (_name, rule, column) => {
    const lost = line({ reach: 'bad', parent: 'a', ...rule }, [1, 0], [1.01, 0]);
    const leaf = await canals([reach('a', null), lost]);
    expect(leaf.reaches.map(({ code }) => code)).toEqual(['a']);
    expect(errors(leaf)).toMatchObject([{ code: 'bad-loss-rule', row: 2, column }]);
    const branch = await canals([reach('a', null), lost, reach('c', 'bad', 2)]);
    expect(branch.reaches).toEqual([]);
    expect(errors(branch)).toMatchObject([
      { code: 'bad-loss-rule', row: 2 },
      { code: 'orphan-reach', row: 3, message: expect.stringContaining('which was left out: Reach bad is left out') },
    ]);
  });

  test('the tree is that of the file with the stored reaches', async () => {
    const knownReaches = [
      { code: 'main', parentCode: null },
      { code: 'L1', parentCode: 'main' },
    ];
    const added = await canals([reach('L2', 'L1')], {}, { knownReaches });
    expect(added.reaches.map(({ code, parentCode }) => [code, parentCode])).toEqual([['L2', 'L1']]);
    expect(errors(await canals([reach('main', 'L1')], {}, { knownReaches }))).toMatchObject([
      { code: 'reach-cycle', row: 1, message: expect.stringContaining('L1 (stored)') },
      { code: 'no-head' },
    ]);
    const second = await canals([reach('other', null)], {}, { knownReaches });
    expect(errors(second)).toMatchObject([{ code: 'several-heads', message: expect.stringMatching(/other, main \(stored\)/) }]);
    expect(second.reaches).toEqual([]);
  });

  test('replacing takes the file alone, and tells what it removes', async () => {
    const knownReaches = [
      { code: 'main', parentCode: null },
      { code: 'L1', parentCode: 'main' },
    ];
    const replaced = await canals([reach('other', null)], { replace: true }, { knownReaches });
    expect(replaced.reaches).toHaveLength(1);
    expect(replaced.findings).toMatchObject([
      {
        severity: 'warning',
        code: 'reaches-removed',
        message: 'Replacing the canals removes 2 reaches that the file does not have: main, L1.',
      },
    ]);
    expect(errors(await canals([reach('L2', 'L1')], { replace: true }, { knownReaches }))).toMatchObject([{ code: 'orphan-reach' }]);
    const used = await canals(
      [reach('main', null)],
      { replace: true },
      { knownReaches, knownTurnouts: [{ code: 'T1', reachCode: 'L1' }], parcelCounts: { L1: 3, main: 2 } },
    );
    expect(errors(used).map(({ message }) => message)).toEqual([
      '1 turnout stands on reaches that would be removed: T1 on L1.',
      'Parcels name reaches that would be removed: 3 parcels on L1.',
    ]);
    expect(used.reaches).toEqual([]);
    const unread = await canals(
      [reach('main', null), line({ reach: 'L1', parent: 'main', loss_rule: 'magic' }, [1, 0], [2, 0])],
      {
        replace: true,
      },
      { knownReaches },
    );
    expect(errors(unread).map(({ code }) => code)).toEqual(['bad-loss-rule', 'replaced-reach-unread']);
    expect(unread.reaches).toEqual([]);
  });

  test('codes that are too long or read as a folder are refused', async () => {
    const reading = await canals([reach('a', null), reach('x'.repeat(101), 'a'), reach('y'.repeat(100), 'a'), reach('..', 'a')]);
    expect(reading.reaches.map(({ code }) => code)).toEqual(['a', 'y'.repeat(100)]);
    expect(errors(reading)).toMatchObject([
      { code: 'code-too-long', row: 2, limit: 'at most 100 characters' },
      { code: 'bad-code', row: 4 },
    ]);
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
