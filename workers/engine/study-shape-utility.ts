import { connection, phases, wholeNumber } from './shape-electrical.ts';
import { between, listOf, name, notNegative, number, object, oneOf, positive, truth } from './shape.ts';

/* The shape of what a feeder alone has: what the utility knows of its sections, circuits, substations and services. */

const section = object(
  { id: name, device: name },
  {
    peakKw: notNegative,
    minimumKw: notNegative,
    daytimeFixedKw: notNegative,
    daytimeTrackingKw: notNegative,
    minimumIs: oneOf('gross', 'net'),
    netOf: listOf(name),
    groundedLoadShare: between(0, 1),
    largestCustomerShare: between(0, 1),
    uniform: truth,
    transfers: truth,
  },
);

const circuit = object({ id: name }, { lineType: oneOf('three-wire', 'four-wire'), subjectToRules: truth });

const substation = object(
  { id: name },
  {
    transformer: name,
    connection,
    kva: positive,
    highSideKv: positive,
    minimumKw: notNegative,
    peakKw: notNegative,
    zeroSequenceVoltageProtection: truth,
    reverseFlow: truth,
    stabilityLimited: truth,
    transmissionSideKw: notNegative,
  },
);

const serviceTransformer = object(
  { id: name, node: name, kva: positive, secondaryV: positive },
  {
    phases,
    centreTapped: truth,
    shared: truth,
    impedancePercent: positive,
    xr: notNegative,
    generationKw: notNegative,
    usualDrop: object({ r: notNegative, x: number }),
  },
);

const secondaryNetwork = object(
  { id: name, kind: oneOf('spot', 'area'), nodes: listOf(name, 1) },
  { peakKw: notNegative },
);

const regulator = object(
  {
    id: name,
    branch: name,
    end: oneOf('from', 'to'),
    phases,
    setVoltagePu: positive,
    bandwidthPu: positive,
  },
  {
    rangePu: between(0, 1),
    steps: wholeNumber,
    compensation: object({ r: number, x: number }),
    reverse: oneOf('locked', 'bidirectional', 'cogeneration'),
    ratedA: positive,
  },
);

export const utilityLists = {
  sections: listOf(section),
  circuits: listOf(circuit),
  substations: listOf(substation),
  serviceTransformers: listOf(serviceTransformer),
  secondaryNetworks: listOf(secondaryNetwork),
  regulators: listOf(regulator),
};
