import type { Feeder, Inverter, Scenario } from '../../../../shared/schemas/study.ts';
import type { Section, ServiceTie, ServiceTransformer } from '../../../../shared/schemas/study-utility.ts';
import type { Draw } from './odd-draw.ts';
import { partsOf } from './odd-draw.ts';

/* What the utility knows of the feeder of an odd study besides the network, as far as it does. */

/** What the utility knows besides, as far as it does. */
export function addRecords(draw: Draw, feeder: Feeder): void {
  const devices = feeder.devices ?? [];
  const generators = [...(feeder.machines ?? []), ...(feeder.inverters ?? [])].map(({ id }) => id);
  if (devices.length > 0) {
    const section = (index: number): Section => ({
      id: `section-${index}`,
      device: draw.pick(devices).id,
      ...draw.some({
        peakKw: draw.pick([0, 3000, 10000]),
        minimumKw: draw.pick([0, 200, 3000]),
        daytimeFixedKw: draw.pick([0, 400, 4000]),
        daytimeTrackingKw: draw.pick([0, 300, 3500]),
        minimumIs: draw.pick(['gross', 'net'] as const),
        netOf: generators.length > 0 && draw.truth() ? [draw.pick(generators)] : [],
        groundedLoadShare: draw.pick([0, 0.5, 1]),
        largestCustomerShare: draw.pick([0, 0.5, 1]),
        uniform: draw.truth(),
        transfers: draw.truth(),
      }),
    });
    feeder.sections = draw.many(4, section);
  }
  feeder.circuits = draw.many(1, () => ({
    id: 'west',
    ...draw.some({ lineType: draw.pick(['three-wire', 'four-wire'] as const), subjectToRules: draw.truth() }),
  }));
  const bank = feeder.transformers?.some(({ id }) => id === 'bank');
  feeder.substations = draw.many(1, () => ({
    id: 'tessaly',
    ...(bank && draw.truth() && { transformer: 'bank' }),
    ...draw.some({
      connection: draw.pick(['Dyn1', 'YNd1', 'YNyn0']),
      kva: 10000,
      minimumKw: draw.pick([0, 1500, 8000]),
      zeroSequenceVoltageProtection: draw.truth(),
      reverseFlow: draw.truth(),
      stabilityLimited: draw.truth(),
      transmissionSideKw: draw.pick([0, 9000]),
    }),
  }));
  feeder.serviceTransformers = draw.many(2, (index): ServiceTransformer => {
    const { id: node, phases } = draw.pick(feeder.nodes);
    return {
      id: `service-${index}`,
      node,
      kva: draw.pick([10, 50, 167]),
      secondaryV: draw.pick([240, 480]),
      ...draw.some({
        phases: draw.pick(partsOf[phases]!),
        centreTapped: draw.truth(),
        shared: draw.truth(),
        impedancePercent: 2,
        xr: draw.pick([0, 2]),
        generationKw: draw.pick([0, 15]),
        usualDrop: draw.pick([
          { r: 0, x: 0 },
          { r: 0.02, x: 0.01 },
        ]),
      }),
    };
  });
  feeder.secondaryNetworks = draw.chance(0.3)
    ? [
        {
          id: 'square',
          kind: draw.pick(['spot', 'spot', 'area']),
          nodes: [draw.pick(feeder.nodes).id],
          ...draw.some({ peakKw: draw.pick([0, 300, 3000]) }),
        },
      ]
    : [];
  const lines = (feeder.lines ?? []).filter(({ phases }) => phases === 'ABC');
  feeder.regulators = lines.length === 0 || draw.chance(0.6) ? [] : [makeRegulator(draw, lines)];
  addScenarios(draw, feeder);
}

function makeRegulator(draw: Draw, lines: readonly { id: string }[]) {
  return {
    id: 'regulator',
    branch: draw.pick(lines).id,
    end: draw.pick(['from', 'to'] as const),
    phases: 'ABC',
    setVoltagePu: 1.02,
    bandwidthPu: 0.0167,
    ...draw.some({
      reverse: draw.pick(['locked', 'bidirectional', 'cogeneration'] as const),
      ratedA: 200,
      compensation: { r: 0.3, x: 0.2 },
    }),
  };
}

export function tieServices(draw: Draw, feeder: Feeder, inverters: readonly Inverter[]): void {
  const transformers = feeder.serviceTransformers ?? [];
  for (const inverter of inverters) {
    if (transformers.length > 0 && inverter.phases.length < 3 && draw.truth())
      inverter.service = makeTie(draw, transformers);
  }
}

function makeTie(draw: Draw, transformers: readonly { id: string }[]): ServiceTie {
  return {
    transformer: draw.pick(transformers).id,
    ...draw.some({
      firstHalfKw: draw.pick([0, 5]),
      secondHalfKw: draw.pick([0, 5]),
      drop: draw.pick([
        { r: 0, x: 0 },
        { r: 0.03, x: 0.01 },
      ]),
      panelInterruptingKa: 10,
    }),
  };
}

function addScenarios(draw: Draw, feeder: Feeder): void {
  const switches = feeder.switches ?? [];
  const outs = [
    ...(feeder.lines ?? []),
    ...(feeder.transformers ?? []),
    ...(feeder.machines ?? []),
    ...(feeder.loads ?? []),
    ...(feeder.sources ?? []),
  ].map(({ id }) => id);
  feeder.scenarios = draw.many(2, (index): Scenario => ({
    id: `scenario-${index}`,
    ...draw.some({ name: 'The other way' }, 0.3),
    ...(switches.length > 0 && { switches: { [draw.pick(switches).id]: draw.truth() } }),
    ...(draw.chance(0.4) && { out: [draw.pick(outs)] }),
  }));
}
