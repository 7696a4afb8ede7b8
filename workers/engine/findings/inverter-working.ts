import type { Quantity, WorkingStep } from '../../../shared/schemas/working.ts';
import { divide } from '../complex.ts';
import type { Complex } from '../complex.ts';
import { Working } from '../working.ts';
import { explainHealthyPhases } from './healthy-phase-working.ts';
import type { InverterCase } from './inverter-cases.ts';
import type { InverterIsland, InverterVoltages } from './inverter-island.ts';
import { sumKva } from './island-generation.ts';
import type { Screening } from './screening.ts';

/* The working of the voltages that inverters make in an island. */

/** Writes down every step from nameplate and load to the highest voltage of a healthy phase, in percent of nominal. */
export function explainInverterCase(screening: Screening, found: InverterCase): readonly WorkingStep[] {
  const { given, voltages } = found;
  const working = new Working();
  const baseKw = screening.model.baseMva * 1000;
  const base = working.given('S', 'Base of all per-unit values', baseKw, 'kVA');
  const { generation, load } = explainSizes(working, found);
  const current = working.compute(
    { symbol: 'I', words: 'Current of the inverters', unit: 'pu' },
    `${generation.symbol}/S`,
    [generation, base],
    given.current,
  );
  const zLoad = working.compute(
    { symbol: 'Z_L', words: 'Load as a resistance, V squared over P', unit: 'pu' },
    `S/${load.symbol}`,
    [base, load],
    voltages.zLoad,
  );
  const { z1, z2, held } = explainPositive(working, given, voltages, zLoad);
  const prefault = explainPrefault(working, given, voltages, { current, z1, held });
  const z0 = explainZero(working, given, voltages, zLoad);
  const rise = explainHealthyPhases(working, { z1, z2, z0 });
  working.compute(
    { symbol: 'V_healthy', words: 'Highest healthy phase over nominal', unit: '%' },
    'V_max*V*100',
    [rise, prefault],
    voltages.highest * 100,
  );
  return working.steps;
}

function explainSizes(working: Working, { island, generators, load, moment }: InverterCase) {
  const beyond = `beyond ${island.device.id}, nameplate`;
  const sources = generators.filter(({ unit }) => unit.kind === 'inverter' && !unit.inverter.gridForming);
  const part = (ofProject: boolean) =>
    sumKva(sources.filter((each) => each.ofProject === ofProject && !load.netOf.has(each.id)));
  const net = moment.netGenerationKw;
  const parts = [
    working.given('P_others', `Inverters connected or ahead in the queue ${beyond}`, part(false), 'kVA'),
    working.given('P_project', `Inverters of the project ${beyond}`, part(true), 'kVA'),
    ...(net > 0
      ? [working.given('P_net', 'What the load is net of, at the moment when it all runs', net, 'kVA')]
      : []),
  ];
  const generation = working.compute(
    { symbol: 'P', words: 'All inverters', unit: 'kVA' },
    parts.map(({ symbol }) => symbol).join(' + '),
    parts,
    moment.generationKw,
  );
  const minimum = working.given('L_min', load.words, load.kw, 'kW');
  if (net === 0) return { generation, load: minimum };
  const gross = working.compute(
    { symbol: 'L', words: 'Load at that moment', unit: 'kW' },
    'L_min + P_net',
    [minimum, parts[2]!],
    moment.loadKw,
  );
  return { generation, load: gross };
}

function explainPositive(
  working: Working,
  { holding }: InverterIsland,
  { z1, z2 }: InverterVoltages,
  zLoad: Quantity,
): { z1: Quantity; z2: Quantity; held: { z: Quantity; e: Quantity } | undefined } {
  const both = (symbol: 'Z1' | 'Z2', sequence: string, value: Complex) => {
    const words = `${sequence} sequence: the load alone, for inverters have none`;
    return working.compute({ symbol, words, unit: 'pu' }, 'Z_L', [zLoad], value);
  };
  if (!holding) {
    return { z1: both('Z1', 'Positive', z1), z2: both('Z2', 'Negative', z2), held: undefined };
  }
  const words = 'sequence impedance of what holds voltage there, from the network';
  const zm = working.given('Z_m1', `Positive ${words}`, holding.z1, 'pu');
  const zm2 = working.given('Z_m2', `Negative ${words}`, holding.z2, 'pu');
  const e = working.given('E', 'Voltage behind it over nominal, from the rule set', holding.e, 'pu');
  const beside = (symbol: 'Z1' | 'Z2', sequence: string, own: Quantity, value: Complex) => {
    const wording = `${sequence} sequence: the load beside it`;
    return working.compute(
      { symbol, words: wording, unit: 'pu' },
      `Z_L*${own.symbol}/(Z_L + ${own.symbol})`,
      [zLoad, own],
      value,
    );
  };
  return {
    z1: beside('Z1', 'Positive', zm, z1),
    z2: beside('Z2', 'Negative', zm2, z2),
    held: { z: zm, e },
  };
}

function explainPrefault(
  working: Working,
  { holding }: InverterIsland,
  { prefault }: InverterVoltages,
  { current, z1, held }: { current: Quantity; z1: Quantity; held: { z: Quantity; e: Quantity } | undefined },
): Quantity {
  const result = { symbol: 'V', words: 'Voltage before the ground fault, utility gone', unit: 'pu' };
  if (!holding || !held) return working.compute(result, 'I*re(Z1)', [current, z1], prefault);
  const formula = 'I*re(Z1) + sqrt(max(0, (E*abs(Z1/Z_m1))^2 - (I*im(Z1))^2))';
  const words = `${result.words}: the current in step with it`;
  return working.compute({ ...result, words }, formula, [current, z1, held.z, held.e], prefault);
}

/** Z0, nothing where it is open. */
function explainZero(
  working: Working,
  { groundedShare, groundSources }: InverterIsland,
  { z0, zLoad: load }: InverterVoltages,
  zLoad: Quantity,
): Quantity | undefined {
  const share = working.given(
    'g',
    'Share of the load that is tied to the earthed neutral',
    groundedShare,
    '',
  );
  const sources = groundSources
    ? working.given('Z_g', 'All ground sources as seen from the place, from the network', groundSources, 'pu')
    : undefined;
  const words = 'Zero sequence: grounded load and ground sources in parallel';
  const result = { symbol: 'Z0', words, unit: 'pu' };
  if (groundedShare === 0) {
    return sources && working.compute(result, 'Z_g', [sources], z0!);
  }
  if (!sources) {
    return working.compute(
      { ...result, words: 'Zero sequence: the grounded load' },
      'Z_L/g',
      [zLoad, share],
      z0!,
    );
  }
  const grounded: Complex = divide({ re: load, im: 0 }, { re: groundedShare, im: 0 });
  const part = working.compute(
    { symbol: 'Z_L0', words: 'Zero sequence of the grounded load', unit: 'pu' },
    'Z_L/g',
    [zLoad, share],
    grounded,
  );
  return working.compute(result, 'Z_L0*Z_g/(Z_L0 + Z_g)', [part, sources], z0!);
}
