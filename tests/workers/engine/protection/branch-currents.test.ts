import { describe, expect, it } from 'vitest';
import type { Complex } from '../../../../workers/engine/complex.ts';
import { magnitude, subtract, sum } from '../../../../workers/engine/complex.ts';
import {
  largestPhase,
  lineGroundFault,
  lineLineFault,
  listBoltedFaults,
} from '../../../../workers/engine/faults.ts';
import { prepareModel } from '../../../../workers/engine/prepare-model.ts';
import { branchCurrentFor, findBranchShares } from '../../../../workers/engine/protection/branch-currents.ts';
import { makeGroundScan, makePhaseScan } from '../../../../workers/engine/protection/zone-scan.ts';
import { findFaultPoint, solveCase } from '../../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../../workers/engine/states.ts';
import { currentInBranch, transfersFrom } from '../../../../workers/engine/transfers.ts';
import { readCase } from '../cases.ts';

describe.each(['random-11', 'random-12', 'random-13', 'random-14', 'marrow-lane'])('In %s', (name) => {
  const study = readCase(name);
  const model = prepareModel(study);
  const solved = solveCase(model, choiceOfState('after', study));
  const ends = model.branches.flatMap((_, branch) => [
    { branch, end: 'from' as const },
    { branch, end: 'to' as const },
  ]);
  const places = model.nodes.flatMap((_, node) => {
    const point = findFaultPoint(solved, node);
    return point ? [{ node, point, transfers: transfersFrom(solved, node) }] : [];
  });

  it('the current in a branch for a fault anywhere is that of a sweep from the fault', () => {
    for (const { branch, end } of ends) {
      const shares = findBranchShares(solved, branch, end);
      for (const { node, point, transfers } of places) {
        for (const fault of listBoltedFaults(point)) {
          const { currents } = branchCurrentFor(solved, shares, node, fault);
          const wanted = currentInBranch(solved, transfers, fault, branch, end);
          const off = Math.max(...currents.map((each, p) => magnitude(subtract(each, wanted[p]!))));
          expect(off, `${node} ${branch} ${end}`).toBeLessThanOrEqual(1e-9 * largestPhase(fault) + 1e-9);
        }
      }
    }
  });

  it('the scan of a zone in numbers finds the least over the choices of phases', () => {
    const rf: Complex = { re: 0.3, im: 0 };
    let compared = 0;
    for (const { branch, end } of ends) {
      const shares = findBranchShares(solved, branch, end);
      if (!shares.shares) continue;
      const scanGround = makeGroundScan(solved, shares, () => rf.re);
      const scanPhase = makePhaseScan(solved, shares);
      for (const { node, point } of places) {
        const present = [0, 1, 2].filter((p) => point.phases & (1 << p));
        const grounds = present.map((p) => {
          const fault = lineGroundFault(point, p, rf);
          return magnitude(sum(...branchCurrentFor(solved, shares, node, fault).currents));
        });
        expect(scanGround(node)).toBeCloseTo(Math.min(...grounds), 8);
        const pairs = present.filter((p) => point.phases & (1 << ((p + 1) % 3)));
        if (pairs.length === 0) continue;
        const phases = pairs.map((p) =>
          largestPhase(branchCurrentFor(solved, shares, node, lineLineFault(point, p, (p + 1) % 3))),
        );
        expect(scanPhase(node)).toBeCloseTo(Math.min(...phases), 8);
        compared += 1;
      }
    }
    expect(compared).toBeGreaterThan(0);
  });
});
