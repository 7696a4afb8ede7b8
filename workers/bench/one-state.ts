import { complexArray } from '../engine/complex.ts';
import { findBusFaults } from '../engine/fault-currents.ts';
import { addUpPaths } from '../engine/laterals.ts';
import { solveOpenCircuit } from '../engine/open-circuit.ts';
import { prepareModel } from '../engine/prepare-model.ts';
import { listFeeds, solveSequenceNetworks } from '../engine/sequence-networks.ts';
import { choiceOfState } from '../engine/states.ts';
import { traceTopology } from '../engine/topology.ts';
import { transferColumn } from '../engine/transfers.ts';
import { wiringOf } from '../engine/wiring.ts';
import { bareTree, sweepBareTree } from './bare-sweep.ts';
import { shortestMs } from './measure.ts';
import type { NetworkKind } from './networks.ts';
import { makeNetwork } from './networks.ts';

/** Times one state, from the arrays of a prepared model to the four faults, in ns a node, beside the bare sweep. */
export function measureOneState(kind: NetworkKind, count: number) {
  const study = makeNetwork(kind, count);
  const model = prepareModel(study);
  const choice = choiceOfState('before', study);
  wiringOf(model);
  const topology = traceTopology(model, choice);
  const networks = solveSequenceNetworks(model, choice, topology);
  const paths = addUpPaths(model, topology);
  const openCircuit = solveOpenCircuit(model, choice, topology, networks);
  const solved = { model, choice, topology, networks, paths, openCircuit };

  const shunts = (['z1', 'z2', 'z0'] as const).map((sequence) => {
    const admittance = complexArray(topology.busCount);
    for (const { bus, z } of listFeeds(model, choice, topology, sequence)) {
      const square = z.re * z.re + z.im * z.im;
      admittance.re[bus]! += z.re / square;
      admittance.im[bus]! -= z.im / square;
    }
    return admittance;
  });
  // Where there is a mesh, its buses stand for more of the chain: the bare sweep knows no loops.
  const parent = topology.parent.map((bus, index) => (bus === -1 ? Math.max(0, index - 1) : bus));
  const bare = bareTree(parent, [topology.z1, topology.z1, topology.z0], shunts);

  const runs = 15;
  const perNode = (milliseconds: number) => Math.round((milliseconds / count) * 1e7) / 10;
  const whole = () => {
    const traced = traceTopology(model, choice);
    const solvedNetworks = solveSequenceNetworks(model, choice, traced);
    const voltages = solveOpenCircuit(model, choice, traced, solvedNetworks);
    findBusFaults({ ...solved, topology: traced, networks: solvedNetworks, openCircuit: voltages });
  };
  const early = shortestMs(() => sweepBareTree(bare), runs);
  const order = shortestMs(() => traceTopology(model, choice), runs);
  const impedances = shortestMs(() => solveSequenceNetworks(model, choice, topology), runs);
  const voltages = shortestMs(() => solveOpenCircuit(model, choice, topology, networks), runs);
  const faults = shortestMs(() => findBusFaults(solved), runs);
  const all = shortestMs(whole, runs);
  const column = shortestMs(() => transferColumn(networks.positive, topology.busCount - 1), runs);
  const bareMs = Math.min(
    early,
    shortestMs(() => sweepBareTree(bare), runs),
  );
  return {
    meshBuses: topology.meshCount,
    nsPerNode: {
      order: perNode(order),
      impedances: perNode(impedances),
      openCircuit: perNode(voltages),
      faults: perNode(faults),
      oneState: perNode(all),
      bareSweep: perNode(bareMs),
      solvePerNodeExtrapolated: perNode(3 * column * count),
    },
    timesBareSweep: Math.round((all / bareMs) * 100) / 100,
  };
}
