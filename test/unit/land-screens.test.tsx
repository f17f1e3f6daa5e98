/** The screens of land that changed, as a browser gets them. */
import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { ImportLineage } from '../../app/_components/import-lineage.tsx';
import { SoilTable } from '../../app/_components/import-soils.tsx';
import { LayerSwitches } from '../../app/_components/map/layer-switches.tsx';
import { GroundHistory } from '../../app/(desk)/parcels/[code]/ground-history.tsx';

const counts = { unchanged: 1180, recoded: 0, reshaped: 0, split: 1, merged: 0, vanished: 0, new: 1, overlaid: 0 };

describe('what becomes of the parcels', () => {
  it('is counted and listed, each with the parcels that follow it', () => {
    const items = [
      {
        change: 'split' as const,
        code: 'P1',
        area_ha: 12.5,
        successors: [
          { code: 'P1', share: 0.6 },
          { code: 'P1b', share: 0.4 },
        ],
      },
      { change: 'new' as const, code: 'P9', area_ha: 3, successors: [] },
    ];
    const text = renderToStaticMarkup(<ImportLineage lineage={{ counts, items, listed_all: true, valid_to: '2023-12-31' }} />);
    expect(text).toContain('1180 are unchanged');
    expect(text).toContain('P1 (60 %), P1b (40 %)');
    expect(text).toContain('cut into several');
    expect(text).not.toContain('joined with others');
  });

  it('says so when nothing changes', () => {
    const none = { ...counts, split: 0, new: 0 };
    const text = renderToStaticMarkup(<ImportLineage lineage={{ counts: none, items: [], listed_all: true, valid_to: null }} />);
    expect(text).toContain('No parcel changes its ground.');
    expect(text).not.toContain('<table');
  });
});

describe('the history of a parcel’s ground', () => {
  const item = {
    parcel: 'P1',
    change: 'split' as const,
    area_ha: 10,
    valid_to: '2023-12-31',
    recorded_at: '2024-02-03T10:00:00Z',
    geometry_version: 3,
    successors: [{ parcel: 'P1b', share: 0.4 }],
  };

  it('names the parcel, its last day and its area in the reader’s units', () => {
    const text = renderToStaticMarkup(<GroundHistory history={{ parcel: 'P1b', stands: true, items: [item] }} units="us" />);
    expect(text).toContain('P1b (40\u00a0%)');
    // 10 ha are 24.71 acres
    expect(text).toContain('24.71');
    expect(text).toContain('cut into several');
  });

  it('is not there where nothing has changed', () => {
    expect(renderToStaticMarkup(<GroundHistory history={{ parcel: 'P1', stands: true, items: [] }} units="metric" />)).toBe('');
  });
});

describe('soil classes of a map', () => {
  it('can be given a soil while the import can still be changed', () => {
    const classes = [{ foreignCode: 'Rn1', count: 7, soilCode: null, by: null }];
    const shown = (mayChange: boolean) =>
      renderToStaticMarkup(
        <SoilTable now={{ options: {} } as never} classes={classes} mayChange={mayChange} patch={(() => {}) as never} busy={false} />,
      );
    expect(shown(true)).toContain('Code of the soil for Rn1');
    expect(shown(false)).not.toContain('<input');
    expect(shown(false)).toContain('left out');
  });
});

describe('layers of the map', () => {
  it('offer service areas only where there are some', () => {
    const layers = { parcels: true, canals: true, areas: false, stations: true, boundary: true };
    const shown = (hasAreas: boolean) =>
      renderToStaticMarkup(
        <LayerSwitches layers={layers} hasAreas={hasAreas} patterns={false} onLayers={() => {}} onPatterns={() => {}} />,
      );
    expect(shown(true)).toContain('Service areas');
    expect(shown(false)).not.toContain('Service areas');
  });
});
