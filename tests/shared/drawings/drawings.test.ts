import { describe, expect, it } from 'vitest';
import { writeSvg, type Drawing } from '../../../shared/drawings/drawing.ts';
import { drawFaultProfile } from '../../../shared/drawings/fault-profile.ts';
import { condensePath, drawOneLine } from '../../../shared/drawings/one-line.ts';
import { drawSequenceNetworks } from '../../../shared/drawings/sequence-networks.ts';
import { drawVoltageProfile } from '../../../shared/drawings/voltage-profile.ts';
import type { SheetPlace } from '../../../shared/schemas/sheets.ts';

const nothing = { none: null, before: null, after: null };

function place(node: string, km: number, changes: Partial<SheetPlace> = {}): SheetPlace {
  const by = { kind: 'line' as const, id: `to-${node}`, km: 0.5, z1: { re: 0.1, im: 0.2 } };
  return {
    node,
    kv: 12.47,
    km,
    by: { ...by, z0: { re: 0.3, im: 0.6 }, zeroSequence: 'series' },
    devices: [],
    shunts: [],
    ofProject: [],
    branchesOff: false,
    threePhaseA: nothing,
    lineGroundA: nothing,
    ...changes,
  };
}

const way = [
  place('bus', 0, { by: undefined, shunts: [{ kind: 'source', id: 'grid' }] }),
  place('n1', 0.5, { devices: ['CB-1'] }),
  place('n2', 1),
  place('n3', 1.5),
  place('poi', 2, {
    devices: ['RC-1'],
    ofProject: [{ kind: 'machine', id: '<genset>' }],
    threePhaseA: { none: 4000, before: 4000, after: 4500 },
  }),
];

/** All places of marks lie on the sheet. */
function listOutside({ marks, width, height }: Drawing): string[] {
  return marks.flatMap(({ at }) =>
    Object.entries(at)
      .filter(([name, value]) => {
        const most = /^(x|x1|x2|cx)$/.test(name) ? width : /^(y|y1|y2|cy)$/.test(name) ? height : undefined;
        return (
          most !== undefined && (Number(value) < 0 || Number(value) > most || Number.isNaN(Number(value)))
        );
      })
      .map(([name, value]) => `${name} ${value}`),
  );
}

describe('A drawing', () => {
  it('puts lines that nothing stands on together, and adds up what they are', () => {
    const stretches = condensePath(way);
    expect(stretches.map(({ places }) => places.map(({ node }) => node))).toEqual([
      ['bus'],
      ['n1'],
      ['n2', 'n3'],
      ['poi'],
    ]);
    expect(stretches[2]).toMatchObject({ km: 1, z1: { im: expect.closeTo(0.4, 9) as number } });
  });

  it('has a name, a description and a table, and escapes what somebody typed', () => {
    const drawing = drawOneLine(way);
    const svg = writeSvg(drawing, 'way');
    expect(svg).toContain('role="img" aria-labelledby="way-title way-desc"');
    expect(svg).toContain('machine &lt;genset&gt;');
    expect(svg).not.toContain('<genset>');
    expect(drawing.table.rows.every((row) => row.length === drawing.table.columns.length)).toBe(true);
    expect(listOutside(drawing)).toEqual([]);
  });

  it('sets the words of a place that has everything below each other', () => {
    const poi = place('poi', 2, {
      branchesOff: true,
      shunts: [{ kind: 'bank', id: 'GB-1' }],
      ofProject: [{ kind: 'inverter', id: 'unit-1' }],
    });
    const { marks } = drawOneLine([...way.slice(0, 4), { ...poi, devices: ['RC-1'] }]);
    const words = marks.filter(({ tag }) => tag === 'text').map(({ at }) => Number(at.y));
    const gaps = words.sort((p, q) => p - q).map((y, index) => y - (words[index - 1] ?? -Infinity));
    expect(words.length).toBeGreaterThan(8);
    expect(Math.min(...gaps)).toBeGreaterThanOrEqual(12);
  });

  it('joins the networks of each fault as the textbooks do', () => {
    const networks = { positive: { re: 0, im: 0.1 }, negative: { re: 0, im: 0.1 }, zero: null };
    const boxes = (kind: Parameters<typeof drawSequenceNetworks>[0], isLateral = false) =>
      drawSequenceNetworks(kind, networks, isLateral)?.table.rows.map(([name]) => name);
    expect(boxes('threePhase')).toEqual(['positive']);
    expect(boxes('lineLine')).toEqual(['positive', 'negative']);
    expect(boxes('lineGround')).toEqual(['positive', 'negative', 'zero']);
    expect(drawSequenceNetworks('lineGround', networks, false)!.description).toContain('Z0 is open');
    expect(drawSequenceNetworks('lineGround', networks, true)!.description).toContain('lateral');
    expect(boxes('threePhase', true)).toBeUndefined();
    for (const kind of ['threePhase', 'lineGround', 'lineLine', 'lineLineGround'] as const) {
      expect(listOutside(drawSequenceNetworks(kind, networks, false)!)).toEqual([]);
    }
  });

  it('draws a profile of one place, and of places without numbers', () => {
    const alone = drawFaultProfile([way[4]!]);
    expect(listOutside(alone)).toEqual([]);
    expect(alone.table.rows).toEqual([
      ['poi', '0.000', '4,000.0', '4,500.0', 'Not evaluated', 'Not evaluated'],
    ]);
    expect(listOutside(drawFaultProfile(way.slice(0, 3)))).toEqual([]);
  });

  it('shows of each place the phase furthest from nominal, against the range', () => {
    const points = [
      { node: 'bus', km: 0, voltagePu: [1, 1.01, null] as [number, number, null] },
      { node: 'poi', km: 2, voltagePu: [0.96, 1.03, null] as [number, number, null] },
    ];
    const drawing = drawVoltageProfile({
      operatingCase: '',
      cases: [{ name: 'peak-after', points }],
      regulators: [{ id: 'VR-1', km: 1 }],
      lowPu: 0.975,
      highPu: 1.05,
    });
    expect(drawing.table.rows).toEqual([
      ['bus', '0.000', '1.0100'],
      ['poi', '2.000', '0.9600'],
    ]);
    expect(listOutside(drawing)).toEqual([]);
  });
});
