import { branchAt } from '../model-parts.ts';
import type { Sweeps } from './flow-sweeps.ts';
import { matrixSize } from './matrix3.ts';
import { floatsBeyond, isReversed } from './two-ports.ts';

/** Marks the places whose voltage to earth nothing ties down: beyond a delta or a star whose neutral is not earthed. */
export function findFloating({ network, isTransformer, slotOf, hasY, y }: Sweeps): Uint8Array {
  const { parent, branch, model } = network;
  const isFloating = new Uint8Array(parent.length);
  for (let place = 0; place < parent.length; place++) {
    const above = parent[place]!;
    if (above === -1) continue;
    isFloating[place] = isFloating[above]!;
    if (!isTransformer[place]) continue;
    const transformer = branchAt(model, branch[place]!);
    if (floatsBeyond(transformer, isReversed(network, place))) {
      isFloating[place] = hasY[place] && isEarthed(y, slotOf[place]! * matrixSize) ? 0 : 1;
    } else if (transformer.zeroSequence.kind === 'shunt') isFloating[place] = 0;
  }
  return isFloating;
}

function isEarthed(y: Float64Array, at: number): boolean {
  let re = 0;
  let im = 0;
  for (let k = at; k < at + matrixSize; k += 2) {
    re += y[k]!;
    im += y[k + 1]!;
  }
  return Math.hypot(re, im) > 1e-9;
}
