import type { Feeder, Neutral, Node } from '../../../../shared/schemas/study.ts';
import type { Draw } from './odd-draw.ts';
import { partsOf } from './odd-draw.ts';
import { makeDevice, makeElements } from './odd-elements.ts';

/* Feeders of odd studies: a tree with laterals, behind a bank or not, at times closed to a loop, fed twice or earthed nowhere. */

export function makeFeeder(draw: Draw): Feeder {
  const kv = draw.pick([4.16, 12.47, 12.47, 34.5]);
  const source = (id: string, node: string, isEarthed: boolean) => {
    const x = draw.between(0.2, 3);
    const z1 = { r: x / draw.between(2, 20), x };
    const z0 = { r: z1.r * 2, x: x * draw.between(0.4, 3) };
    const times = draw.between(1, 3);
    const weaker = ({ r, x: reactance }: typeof z1) => ({ r: r * times, x: reactance * times });
    return {
      id,
      node,
      max: { z1, ...(isEarthed && { z0 }) },
      ...draw.some({ min: { z1: weaker(z1), ...(isEarthed && { z0: weaker(z0) }) } }),
      ...draw.some({ peakVoltagePu: draw.between(0.98, 1.05), minimumVoltagePu: draw.between(0.98, 1.05) }),
    };
  };
  const hasBank = draw.truth();
  const isEarthed = draw.chance(0.85);
  const nodes: Node[] = [{ id: 'bus', kv, phases: 'ABC' }];
  if (hasBank) nodes.push({ id: 'high', kv: 69, phases: 'ABC' });
  const feeder: Feeder & Required<Pick<Feeder, 'lines' | 'transformers' | 'sources' | 'switches'>> = {
    nodes,
    sources: [source('grid', hasBank ? 'high' : 'bus', isEarthed)],
    lines: [],
    transformers: [],
    switches: [],
  };
  if (hasBank) {
    feeder.transformers.push({
      id: 'bank',
      from: 'high',
      to: 'bus',
      kva: draw.pick([2500, 10000, 20000]),
      connection: draw.pick(['Dyn1', 'Dyn1', 'YNyn0', 'YNd1', 'Dd0', 'Yyn0']),
      impedancePercent: draw.between(5, 10),
      xr: draw.between(5, 20),
      ...draw.some({ neutralTo: draw.pick<Neutral>(['solid', 'ungrounded', { r: 0, x: 0.5 }]) }, 0.2),
    });
  }
  const count = draw.upTo(6);
  for (let index = 1; index <= count; index++) {
    const lines = nodes.filter((node) => node.kv === kv);
    const from = draw.pick(lines);
    const phases = draw.chance(0.6) ? from.phases : draw.pick(partsOf[from.phases]!);
    const id = `n${index}`;
    nodes.push({ id, kv, phases });
    const z1 = { r: draw.between(0.05, 0.6), x: draw.between(0.1, 0.6) };
    feeder.lines.push({
      id: `l${index}`,
      from: from.id,
      to: id,
      phases,
      km: draw.between(0.1, 5),
      z1,
      z0: { r: z1.r * 2, x: z1.x * 3 },
      ...draw.some({ circuit: 'west', ampacityA: draw.between(50, 600), mainline: draw.truth() }),
    });
  }
  const backbone = nodes.filter((node) => node.kv === kv && node.phases === 'ABC').map(({ id }) => id);
  const tie = (id: string) => {
    const [from, to] = [draw.pick(backbone), draw.pick(backbone)];
    if (from !== to) feeder.switches.push({ id, from, to, closed: draw.chance(0.3) });
  };
  if (draw.chance(0.4)) tie('tie-1');
  if (draw.chance(0.2)) {
    const [node] = [draw.pick(backbone)];
    feeder.sources.push(source('second', node, isEarthed));
  }
  if (draw.chance(0.4)) {
    const from = draw.pick(backbone);
    nodes.push({ id: 'mill', kv: 0.48, phases: 'ABC' });
    feeder.transformers.push({
      id: 'mill-step',
      from,
      to: 'mill',
      kva: draw.pick([75, 500, 2500]),
      connection: draw.pick(['Dyn1', 'YNyn0', 'YNd1', 'Dd0']),
      impedancePercent: draw.between(2, 6),
      xr: draw.between(1, 8),
    });
  }
  Object.assign(feeder, makeElements(draw, nodes, 'f'));
  feeder.devices = draw.many(5, (index) =>
    makeDevice(draw, `d${index}`, [...feeder.lines, ...feeder.transformers]),
  );
  return feeder;
}
