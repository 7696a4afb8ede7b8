import type {
  Impedance,
  Line,
  Machine,
  Neutral,
  Source,
  Transformer,
} from '../../../shared/schemas/study.ts';
import type { Quantity } from '../../../shared/schemas/working.ts';
import type { Complex } from '../complex.ts';
import type { ConversionPlace, Conversions } from './conversions.ts';

/* The formulas of per-unit.ts, prepare-model.ts and transformer-branch.ts as steps of a sheet. */

const ohms = (symbol: string, words: string, { r, x }: Impedance): Quantity => ({
  symbol,
  words,
  value: { re: r, im: x },
  unit: 'ohm',
});

const named = ({ sequence, number }: ConversionPlace, words: string) => ({
  symbol: `${sequence}_${number}`,
  words,
  unit: 'pu',
});

/** z = ohms/Zb. */
export function convertOhms(
  { baseOhmsAt, screening }: Conversions,
  words: string,
  given: Impedance,
  z: Complex,
  place: ConversionPlace,
): Quantity {
  const base = baseOhmsAt(screening.model.nodes[place.node]!.kv);
  const own = ohms(`Z_${place.number}`, `impedance of ${words}`, given);
  return place.working.compute(named(place, words), `${own.symbol}/${base.symbol}`, [own, base], z);
}

/** z = (ohms per km)·(length, or the sum of lengths)/Zb, of lines of one kind. */
export function convertLines(
  { baseOhmsAt, screening }: Conversions,
  lines: readonly Line[],
  { r, x }: Impedance,
  z: Complex,
  place: ConversionPlace,
): Quantity {
  const { number } = place;
  const perKm: Quantity = {
    symbol: `zkm_${number}`,
    words: 'impedance per km',
    value: { re: r, im: x },
    unit: 'ohm/km',
  };
  const lengths = lines.map(({ id, km }, index): Quantity => {
    const symbol = lines.length === 1 ? `L_${number}` : `L_${number}_${index + 1}`;
    return { symbol, words: `length of ${id}`, value: km, unit: 'km' };
  });
  const base = baseOhmsAt(screening.model.nodes[place.node]!.kv);
  const names = lengths.map(({ symbol }) => symbol).join(' + ');
  const length = lengths.length === 1 ? names : `(${names})`;
  const [first, last] = [lines[0]!.id, lines.at(-1)!.id];
  const words =
    lines.length === 1 ? `line ${first}` : `${lines.length} lines of one kind, ${first} to ${last}`;
  return place.working.compute(
    named(place, words),
    `${perKm.symbol}*${length}/${base.symbol}`,
    [perKm, ...lengths, base],
    z,
  );
}

export function convertSource(
  conversions: Conversions,
  source: Source,
  z: Complex,
  place: ConversionPlace,
): Quantity {
  const { max } = source;
  const given = { z1: max.z1, z2: max.z2 ?? max.z1, z0: max.z0! }[place.sequence];
  return convertOhms(conversions, `source ${source.id}`, given, z, place);
}

/** (r + jx)·Sb·1000/kVA, and in the zero sequence 3·Zn. */
export function convertMachine(
  conversions: Conversions,
  machine: Machine,
  z: Complex,
  place: ConversionPlace,
): Quantity {
  const { number, sequence, working } = place;
  const reactances = {
    z1: ['subtransient reactance', machine.xSubtransientPu],
    z2: ['negative-sequence reactance', machine.x2Pu ?? machine.xSubtransientPu],
    z0: ['zero-sequence reactance', machine.x0Pu ?? 0],
  } as const;
  const [words, xPu] = reactances[sequence];
  const inputs: Quantity[] = [
    {
      symbol: `m_${number}`,
      words: `resistance and ${words}, on its own rating`,
      value: { re: machine.rPu ?? 0, im: xPu },
      unit: 'pu',
    },
    conversions.baseMva,
    { symbol: `S_${number}`, words: 'rating', value: machine.kva, unit: 'kVA' },
  ];
  let formula = `m_${number}*Sb*1000/S_${number}`;
  const earth =
    sequence === 'z0' ? neutralTerm(conversions, machine.neutral, place.node, `n_${number}`) : null;
  if (earth) {
    formula += ` + ${earth.formula}`;
    inputs.push(...earth.inputs);
  }
  return working.compute(named(place, `machine ${machine.id}`), formula, inputs, z);
}

/** pct/100·(rated kV/kV)²·Sb·1000/kVA at the angle atan(X/R), in the zero sequence with 3·Zn of its neutrals. */
export function convertTransformer(
  conversions: Conversions,
  transformer: Transformer,
  toNode: number,
  z: Complex,
  place: ConversionPlace,
): Quantity {
  const { screening, baseMva } = conversions;
  const { number: n, sequence, working } = place;
  const { id, kva, impedancePercent, zeroImpedancePercent, xr, connection } = transformer;
  const isZero = sequence === 'z0';
  const kvTo = screening.model.nodes[toNode]!.kv;
  const percent = isZero ? (zeroImpedancePercent ?? impedancePercent) : impedancePercent;
  const inputs: Quantity[] = [
    { symbol: `p_${n}`, words: 'impedance on its own rating', value: percent, unit: '%' },
    baseMva,
    { symbol: `S_${n}`, words: 'rating', value: kva, unit: 'kVA' },
    { symbol: `q_${n}`, words: 'X/R', value: xr, unit: '' },
  ];
  let formula = `p_${n}/100*Sb*1000/S_${n}*exp(i*atan(q_${n}))`;
  if (transformer.ratedKvTo !== undefined && transformer.ratedKvTo !== kvTo) {
    inputs.push(
      { symbol: `Ur_${n}`, words: 'rated voltage', value: transformer.ratedKvTo, unit: 'kV' },
      { symbol: `U_${n}`, words: 'nominal voltage there', value: kvTo, unit: 'kV' },
    );
    formula += `*(Ur_${n}/U_${n})^2`;
  }
  const earths = isZero ? listEarths(conversions, transformer, toNode, n) : [];
  for (const earth of earths) {
    formula += ` + ${earth.formula}`;
    inputs.push(...earth.inputs);
  }
  return working.compute(named(place, `transformer ${id}, ${connection}`), formula, inputs, z);
}

type Term = { formula: string; inputs: Quantity[] };

function listEarths(
  conversions: Conversions,
  { id, connection, neutralFrom, neutralTo }: Transformer,
  toNode: number,
  number: number,
): Term[] {
  const { model } = conversions.screening;
  const { from } = model.branches[model.branchIndex.get(id)!]!;
  const earths = [
    connection.startsWith('YN') ? neutralTerm(conversions, neutralFrom, from, `nf_${number}`) : null,
    connection.includes('yn') ? neutralTerm(conversions, neutralTo, toNode, `nt_${number}`) : null,
  ];
  return earths.filter((earth) => earth !== null);
}

/** 3·Zn/Zb; nothing of a neutral that is solidly earthed or not at all. */
function neutralTerm(
  { baseOhmsAt, screening }: Conversions,
  neutral: Neutral | undefined,
  node: number,
  symbol: string,
): Term | null {
  if (neutral === undefined || typeof neutral === 'string') return null;
  const base = baseOhmsAt(screening.model.nodes[node]!.kv);
  return {
    formula: `3*${symbol}/${base.symbol}`,
    inputs: [ohms(symbol, 'impedance of the neutral', neutral), base],
  };
}
