import { magnitude } from '../complex.ts';
import { nodeAt } from '../model-parts.ts';
import { estimateChange, solveTwoNode } from '../flow/two-node.ts';
import { baseOhms } from '../per-unit.ts';
import type { Working } from '../working.ts';
import type { Grid, Power } from './rapid-voltage-change.ts';
import { numberOf } from './rule-parameters.ts';
import type { Screening } from './screening.ts';

/* How a rapid voltage change comes about, step by step. */

const id = 'rapid-voltage-change';

/** Steps up to R and X in ohms and the nominal voltage. */
function giveGrid({ model, poi }: Screening, { z, of }: Grid, working: Working) {
  const { kv } = nodeAt(model, poi);
  const ohms = baseOhms(model.baseMva, kv);
  return {
    kv,
    voltage: working.given('U_n', 'Nominal voltage between phases at the point of interconnection', kv, 'kV'),
    r: working.given('R', `Resistance of ${of}, weakest source`, z.re * ohms, 'ohm'),
    x: working.given('X', `Reactance of ${of}, weakest source`, z.im * ohms, 'ohm'),
  };
}

/** Two nodes, exactly, with the estimate beside it. */
export function workChange(
  screening: Screening,
  grid: Grid,
  { kw, kvar }: Power,
  working: Working,
): { value: number; note: string } | undefined {
  const { z } = grid;
  const baseKva = screening.model.baseMva * 1000;
  const [pPu, qPu] = [kw / baseKva, kvar / baseKva];
  const volts = solveTwoNode(z, pPu, qPu);
  if (volts === undefined) return undefined;
  const { kv, voltage, r, x } = giveGrid(screening, grid, working);
  const p = working.given('P', 'Power that goes or comes, at nameplate', kw / 1000, 'MW');
  const q = working.given('Q', 'Vars with it, positive into the grid', kvar / 1000, 'Mvar');
  const mva = (kv * kv) / (magnitude(z) * baseOhms(screening.model.baseMva, kv));
  const strength = working.compute(
    { symbol: 'S_sc', words: 'Short-circuit power of the grid', unit: 'MVA' },
    'U_n^2/sqrt(R^2 + X^2)',
    [voltage, r, x],
    mva,
  );
  const estimate = estimateChange(z, pPu, qPu) * 100;
  working.compute(
    { symbol: 'd_est', words: 'Estimate: dS/Ssc*cos(psi - phi)', unit: '%' },
    'sqrt(P^2 + Q^2)/S_sc*cos(atan(X/R) - atan(Q/P))*100',
    [p, q, strength, r, x],
    estimate,
  );
  const along = working.compute(
    { symbol: 'a', words: 'In phase with the voltage', unit: 'pu' },
    '(R*P + X*Q)/U_n^2',
    [r, p, x, q, voltage],
    z.re * pPu + z.im * qPu,
  );
  const across = working.compute(
    { symbol: 'b', words: 'Across it', unit: 'pu' },
    '(X*P - R*Q)/U_n^2',
    [x, p, r, q, voltage],
    z.im * pPu - z.re * qPu,
  );
  const signed = (volts - 1) * 100;
  const exact = working.compute(
    { symbol: 'd_s', words: 'Exactly: V - 1 from V^4 - (1 + 2a)V^2 + a^2 + b^2 = 0', unit: '%' },
    '(sqrt(0.5 + a + sqrt((0.5 + a)^2 - a^2 - b^2)) - 1)*100',
    [along, across],
    signed,
  );
  const value = Math.abs(signed);
  working.compute({ symbol: 'd', words: 'Size of the change', unit: '%' }, 'abs(d_s)', [exact], value);
  const note = `${describePower(kw, kvar)} against ${mva.toFixed(1)} MVA from the weakest source: ${signed.toFixed(3)} % exactly, ${estimate.toFixed(3)} % by the estimate.`;
  return { value, note };
}

/** The transformer as a reactance X_m that draws a multiple of its rated current at nominal voltage: V = X_m/|R + j(X + X_m)|. */
export function workInrush(
  screening: Screening,
  grid: Grid,
  kva: number,
  working: Working,
): { value: number; note: string } {
  const multiple = numberOf(screening, id, 'inrushMultiple');
  const { baseMva } = screening.model;
  const { z } = grid;
  const { kv, voltage, r, x } = giveGrid(screening, grid, working);
  const size = working.given('S_T', "Rated power of the project's transformers together", kva / 1000, 'MVA');
  const m = working.given('m', 'Inrush over rated current, from the rule set', multiple, '');
  const ohms = baseOhms(baseMva, kv);
  const magnetising = (baseMva * 1000) / (multiple * kva);
  const xm = working.compute(
    { symbol: 'X_m', words: 'Reactance that draws as much at nominal voltage', unit: 'ohm' },
    'U_n^2/(m*S_T)',
    [voltage, m, size],
    magnetising * ohms,
  );
  const drop = (1 - magnetising / Math.hypot(z.re, z.im + magnetising)) * 100;
  working.compute(
    { symbol: 'd', words: 'Fall of the voltage, of nominal', unit: '%' },
    '(1 - X_m/sqrt(R^2 + (X + X_m)^2))*100',
    [r, x, xm],
    drop,
  );
  return {
    value: drop,
    note: `An estimate: ${kva} kVA of transformers drawing ${multiple} times their rated current at once. Units energised from their own side, or one after the other, change less.`,
  };
}

function describePower(kw: number, kvar: number): string {
  const vars = Math.abs(kvar) < 0.05 ? '' : ` and ${Number(kvar.toFixed(1))} kvar`;
  return `${Number(kw.toFixed(1))} kW${vars}`;
}
