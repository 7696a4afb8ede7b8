import type { Feeder, Neutral, Node, Project, Study } from '../../../../shared/schemas/study.ts';
import { Draw } from './odd-draw.ts';
import { makeDevice, makeElements } from './odd-elements.ts';
import { makeFeeder } from './odd-feeders.ts';
import { addRecords, tieServices } from './odd-records.ts';

/*
 * Odd but mostly valid studies, made from a number: every optional field is there or not, sizes are zero or enormous, feeders are
 * closed to loops, nothing is earthed, the project is at the bus, on a lateral, without generators.
 */

type OddStudy = Study & { project: Project };

export function makeOddStudy(seed: number): OddStudy {
  const draw = new Draw(seed);
  const feeder = makeFeeder(draw);
  const project = makeProject(draw, feeder);
  addRecords(draw, feeder);
  tieServices(draw, feeder, [...(feeder.inverters ?? []), ...(project.inverters ?? [])]);
  return {
    format: 'feederwright.study/1',
    frequencyHz: draw.pick([50, 60]),
    baseMva: draw.pick([1, 10, 100]),
    prefaultFactor: { max: draw.pick([1, 1.05, 1.1]), min: draw.pick([0.95, 1]) },
    ...draw.some({ minimumFaultOhm: draw.pick([0, 0, 20, 40]) }),
    ...draw.some(
      {
        options: draw.some({ method: draw.pick(['prefault', 'iec60909'] as const), motorLoad: draw.truth() }),
      },
      0.3,
    ),
    feeder,
    project,
  };
}

function makeProject(draw: Draw, feeder: Feeder): Project {
  const place = draw.pick(feeder.nodes.filter(({ kv }) => kv < 60));
  const project: Project = { id: 'project', node: place.id, ...draw.some({ panelInterruptingKa: 10 }, 0.3) };
  let at: Node = place;
  if (place.phases === 'ABC' && draw.chance(0.5)) {
    at = { id: 'site', kv: 0.48, phases: 'ABC' };
    project.nodes = [at];
    project.transformers = [
      {
        id: 'step-up',
        from: place.id,
        to: 'site',
        kva: draw.pick([75, 500, 2500]),
        connection: draw.pick(['YNd1', 'Dyn1', 'YNyn0', 'Dd0', 'YNy0']),
        impedancePercent: draw.between(2, 7),
        xr: draw.between(1, 10),
        ...draw.some({ neutralFrom: draw.pick<Neutral>(['solid', 'ungrounded', { r: 0, x: 3 }]) }, 0.3),
      },
    ];
    project.devices = draw.many(1, () => makeDevice(draw, 'own', project.transformers!));
  }
  if (draw.chance(0.9)) Object.assign(project, makeElements(draw, [at], 'p'));
  return project;
}
