import type {
  DeviceCount,
  PreApplicationFigures,
  SectionFigures,
} from '../../shared/schemas/pre-application-reports.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Device, Feeder, Line, Study } from '../../shared/schemas/study.ts';
import type { Section } from '../../shared/schemas/study-utility.ts';
import { findCutOff, traceUpstream } from './findings/upstream.ts';
import type { Upstream } from './findings/upstream.ts';
import type { Model } from './case.ts';
import { prepareModel } from './prepare-model.ts';
import { runStudy } from './run-study.ts';
import { choiceOfState } from './states.ts';

/* What is known of a place before a project is proposed there, read off the model with the queue as it stands. */

/** What stands ahead in the queue has ids that begin so. */
const queuedMark = 'q-';

type Place = { feeder: Feeder; model: Model; upstream: Upstream; node: number; circuit: string | undefined };

/**
 * Reports a node of the feeder: the way to its source, what hangs on its circuit and bank, and its fault currents.
 * `study` has no project. A share of `dutyShare` (0.875) of an interrupting rating counts as near it.
 */
export function reportPreApplication(
  study: Study,
  nodeId: string,
  ruleSet: RuleSet,
  dutyShare: number,
): PreApplicationFigures {
  const { feeder } = study;
  const model = prepareModel(study);
  const node = model.nodeIndex.get(nodeId)!;
  const choice = choiceOfState('before', study);
  const upstream = traceUpstream(model, choice, node);
  const lines = listLines(feeder, model, upstream);
  const circuit = lines.find((line) => line.circuit !== undefined)?.circuit;
  const place: Place = { feeder, model, upstream, node, circuit };
  const devices = listDevices(place);
  const result = runStudy(study, ruleSet);
  const { threePhase, lineGround } = result.nodes[nodeId]!.before;
  const sections = listSections(place, devices);
  const isNear = ({ id }: Device) => (result.devices[id]?.before.availableLoading ?? 0) > dutyShare;
  return {
    ...describeNode(place, nodeId),
    ...describeBank(place, sumSizes(place)),
    ...describeLines(place, lines),
    supply: describeSupply(place),
    circuitPeakKw: sections.at(-1)?.peakKw ?? null,
    circuitMinimumKw: sections.at(-1)?.minimumKw ?? null,
    sections: sections.map(toFigures),
    devices: countKinds(devices),
    threePhaseFaultA: threePhase,
    lineGroundFaultA: lineGround,
    nearRating: devices.filter(isNear).length,
  };
}

function describeNode({ feeder, circuit }: Place, nodeId: string) {
  const { kv, phases } = feeder.nodes.find(({ id }) => id === nodeId)!;
  return { kv, phases, lineType: feeder.circuits?.find(({ id }) => id === circuit)?.lineType ?? null };
}

function describeBank({ feeder }: Place, sizes: ReturnType<typeof sumSizes>) {
  const substation = feeder.substations?.[0];
  const transformer = feeder.transformers?.find(({ id }) => id === substation?.transformer);
  const bankKva = substation?.kva ?? null;
  const taken = sizes.existingOnBankKw + sizes.queuedOnBankKw;
  return {
    ...sizes,
    bankKva,
    availableOnBankKw: bankKva === null ? null : Math.max(0, bankKva - taken),
    highSideKv: substation?.highSideKv ?? null,
    stabilityLimited: substation?.stabilityLimited ?? null,
    hasTapChanger: transformer?.onLoadTapChanger ?? null,
  };
}

function describeLines(place: Place, lines: readonly Line[]) {
  const { feeder, circuit } = place;
  const circuits = circuitOfNodes(place);
  const isKnown = lines.every(({ mainline }) => mainline !== undefined);
  const ampacities = lines.flatMap(({ ampacityA }) => ampacityA ?? []);
  return {
    distanceKm: lines.reduce((sum, { km }) => sum + km, 0),
    isMainline: isKnown ? lines.every(({ mainline }) => mainline === true) : null,
    limitingAmpacityA: ampacities.length > 0 ? Math.min(...ampacities) : null,
    regulators: (feeder.regulators ?? []).filter(({ branch }) => lines.some(({ id }) => id === branch))
      .length,
    capacitorsOnCircuit: (feeder.capacitors ?? []).filter(({ node }) => circuits.get(node) === circuit)
      .length,
  };
}

function listLines({ lines = [] }: Feeder, model: Model, { branches }: Upstream) {
  const onPath = new Set(branches);
  return lines.filter(({ id }) => onPath.has(model.branchIndex.get(id)!));
}

/** Devices on the way, the one nearest the place first. */
function listDevices({ feeder, model, upstream }: Place): Device[] {
  const placeOf = new Map(upstream.branches.map((branch, index) => [branch, index]));
  const distance = (device: Device) => placeOf.get(model.branchIndex.get(device.branch)!) ?? -1;
  return (feeder.devices ?? [])
    .filter((device) => distance(device) !== -1)
    .sort((p, q) => distance(p) - distance(q));
}

function listSections({ feeder }: Place, devices: readonly Device[]): Section[] {
  return devices.flatMap(({ id }) => (feeder.sections ?? []).filter(({ device }) => device === id));
}

function toFigures(section: Section): SectionFigures {
  const { peakKw = null, minimumKw = null, daytimeFixedKw = null, daytimeTrackingKw = null } = section;
  return { peakKw, minimumKw, daytimeFixedKw, daytimeTrackingKw };
}

function countKinds(devices: readonly Device[]): DeviceCount[] {
  return [...new Set(devices.map(({ kind }) => kind))].map((kind) => {
    const alike = devices.filter((device) => device.kind === kind);
    const ratings = alike.flatMap(({ interruptingKa }) => interruptingKa ?? []);
    return {
      kind,
      count: alike.length,
      leastInterruptingKa: ratings.length > 0 ? Math.min(...ratings) : null,
      mostInterruptingKa: ratings.length > 0 ? Math.max(...ratings) : null,
    };
  });
}

/** By node: the circuit of the lines that meet it; of what stands behind a transformer that of its other side. */
function circuitOfNodes({ feeder }: Place): ReadonlyMap<string, string | undefined> {
  const circuits = new Map<string, string | undefined>();
  for (const { from, to, circuit } of feeder.lines ?? []) {
    for (const node of [from, to]) {
      // Where two circuits meet, a bus or a tie, the node is of neither.
      circuits.set(node, !circuits.has(node) || circuits.get(node) === circuit ? circuit : undefined);
    }
  }
  for (const { from, to } of feeder.transformers ?? []) {
    if (!circuits.has(to) && circuits.has(from)) circuits.set(to, circuits.get(from));
  }
  return circuits;
}

function sumSizes(place: Place) {
  const { feeder, circuit } = place;
  const circuits = circuitOfNodes(place);
  const sizes = {
    existingOnCircuitKw: 0,
    queuedOnCircuitKw: 0,
    existingOnBankKw: 0,
    queuedOnBankKw: 0,
  };
  for (const { id, node, kva } of [...(feeder.machines ?? []), ...(feeder.inverters ?? [])]) {
    const isQueued = id.startsWith(queuedMark);
    sizes[isQueued ? 'queuedOnBankKw' : 'existingOnBankKw'] += kva;
    if (circuits.get(node) !== circuit) continue;
    sizes[isQueued ? 'queuedOnCircuitKw' : 'existingOnCircuitKw'] += kva;
  }
  return sizes;
}

function describeSupply({ feeder, model, upstream, node }: Place): PreApplicationFigures['supply'] {
  const { id } = model.nodes[node]!;
  const network = feeder.secondaryNetworks?.find(({ nodes }) => nodes.includes(id));
  if (network) return network.kind === 'spot' ? 'spot-network' : 'area-network';
  const ends = upstream.isSource[upstream.path.at(-1)!] === 1;
  if (!ends) return 'no-source';
  // Radial where every branch of the way cuts the place off.
  const isRadial = upstream.branches.every((branch) => findCutOff(upstream, node, branch) !== undefined);
  return isRadial ? 'radial' : 'closed-loop';
}
