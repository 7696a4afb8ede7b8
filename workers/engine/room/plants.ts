import type { Project } from '../../../shared/schemas/study.ts';
import type { Complex } from '../complex.ts';

/*
 * The plants that room is looked for with. Both are usual ones (common practice; values from memory), so that a real project
 * is screened by its own data later.
 *
 * inverters  three-phase, 1.2 times rated current at a fault, straight at the node: its transformer would change nothing about
 *            a fixed current.
 * machine    synchronous, Xd" 0.16, X2 0.17, R 0.01, behind a transformer of its own size with 6 % and X/R 10, grounded star on
 *            the utility side and delta on the machine's, a reactor in the neutral so that X0/X1 is 2.5.
 */

export type PlantKind = 'inverters' | 'machine';

export const inverterFaultCurrentPu = 1.2;
const machinePu = { r: 0.01, xSubtransient: 0.16, x2: 0.17 };
const transformerPercent = 6;
const transformerXr = 10;
const x0OverX1 = 2.5;

const angle = Math.atan(transformerXr);
const transformerPu: Complex = {
  re: (transformerPercent / 100) * Math.cos(angle),
  im: (transformerPercent / 100) * Math.sin(angle),
};
const r1 = transformerPu.re + machinePu.r;
const x1 = transformerPu.im + machinePu.xSubtransient;
const neutralPu = (x0OverX1 * x1 - transformerPu.im) / 3;

/** Of the machine with its transformer, seen from the node, per unit on its own kVA. */
export const machinePlantPu = {
  z1: { re: r1, im: x1 },
  z2: { re: r1, im: transformerPu.im + machinePu.x2 },
  z0: { re: transformerPu.re, im: x0OverX1 * x1 },
} as const;

/** The inverters as they stand in a study; the loads' questions ask for no more of a machine either. */
export function makeInverterProject(node: string, kva: number): Project {
  const unit = {
    id: 'room-inverters',
    node,
    phases: 'ABC',
    kva,
    faultCurrentPu: inverterFaultCurrentPu,
    energy: 'photovoltaic' as const,
    listed: true,
    listing: { standard: 'IEEE 1547', antiIslanding: true },
  };
  return { id: 'room', node, inverters: [unit] };
}

/** The machine with its transformer as it stands in a study. */
export function makeMachineProject(node: string, kv: number, kva: number): Project {
  const site = 'room-site';
  const baseOhms = (kv * kv) / (kva / 1000);
  return {
    id: 'room',
    node,
    nodes: [{ id: site, kv: 4.16, phases: 'ABC' }],
    transformers: [
      {
        id: 'room-transformer',
        from: node,
        to: site,
        kva,
        connection: 'YNd1',
        impedancePercent: transformerPercent,
        xr: transformerXr,
        neutralFrom: { r: 0, x: neutralPu * baseOhms },
      },
    ],
    machines: [makeMachine(site, kva)],
  };
}

function makeMachine(node: string, kva: number) {
  return {
    id: 'room-machine',
    node,
    kind: 'synchronous' as const,
    kva,
    rPu: machinePu.r,
    xSubtransientPu: machinePu.xSubtransient,
    x2Pu: machinePu.x2,
    neutral: 'ungrounded' as const,
  };
}

/** A plant that generates the same, straight at the node: enough for what only asks how much. */
export function makeBareProject(kind: PlantKind, node: string, kva: number): Project {
  return kind === 'inverters'
    ? makeInverterProject(node, kva)
    : { id: 'room', node, machines: [makeMachine(node, kva)] };
}
