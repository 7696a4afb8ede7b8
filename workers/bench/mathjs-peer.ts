import { complex, lusolve, slu, sparse } from 'mathjs';
import { choiceOfState } from '../engine/states.ts';
import { prepareModel } from '../engine/prepare-model.ts';
import { listFeeds } from '../engine/sequence-networks.ts';
import { traceTopology } from '../engine/topology.ts';
import { shortestMs } from './measure.ts';
import { makeNetwork } from './networks.ts';

const sizes = [50, 100, 200];

/**
 * The general-purpose way that npm offers: a sparse LU factorization and one solve for each node, of one network out of three,
 * measured at sizes it can do and drawn out by the growth between the last two.
 */
export function measureMathjs() {
  const measured = sizes.map((count) => ({ nodes: count, ...measureAt(count) }));
  const [smaller, larger] = measured.slice(-2) as [(typeof measured)[0], (typeof measured)[0]];
  const exponent = Math.log2(larger.msForAllNodes / smaller.msForAllNodes);
  const extrapolate = (count: number) =>
    Math.round(((larger.msForAllNodes * (count / larger.nodes) ** exponent) / count) * 1e6);
  return {
    peer: 'mathjs slu and lusolve, positive sequence alone, a solve for each node',
    measured,
    growthExponent: Math.round(exponent * 100) / 100,
    nsPerNodeExtrapolated: {
      1000: extrapolate(1000),
      10000: extrapolate(10_000),
      100000: extrapolate(100_000),
    },
  };
}

function measureAt(count: number) {
  const study = makeNetwork('radial', count);
  const model = prepareModel(study);
  const choice = choiceOfState('before', study);
  const topology = traceTopology(model, choice);
  const matrix = sparse();
  matrix.resize([count, count], 0);
  const addTo = (i: number, j: number, re: number, im: number) => {
    const known = complex(matrix.get([i, j]) as unknown as string);
    matrix.set([i, j], complex(known.re + re, known.im + im));
  };
  for (const { from, to, z1 } of model.branches) {
    const square = z1.re ** 2 + z1.im ** 2;
    const [re, im] = [z1.re / square, -z1.im / square];
    const [i, j] = [topology.busOf[from]!, topology.busOf[to]!];
    addTo(i, i, re, im);
    addTo(j, j, re, im);
    addTo(i, j, -re, -im);
    addTo(j, i, -re, -im);
  }
  for (const { bus, z } of listFeeds(model, choice, topology, 'z1')) {
    const square = z.re ** 2 + z.im ** 2;
    addTo(bus, bus, z.re / square, -z.im / square);
  }
  const factor = () => slu(matrix, 2, 0.001);
  const factorMs = shortestMs(factor, 2, 50);
  const factors = factor();
  const column = Array.from({ length: count }, (_, index) => (index === count - 1 ? 1 : 0));
  const solveMs = shortestMs(() => lusolve(factors, column), 2, 50);
  return { factorMs, solveMs, msForAllNodes: factorMs + count * solveMs };
}
