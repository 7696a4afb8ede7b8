import { drawSequenceNetworks, type ReducedNetworks } from './drawings/sequence-networks.ts';
import { formatNumber, formatQuantity } from './format.ts';
import { formatValue, printStep } from './quantity-words.ts';
import type { SequenceName, Sheet, SheetFault, SheetNetwork, SheetState } from './schemas/sheets.ts';
import type { FaultKind } from './schemas/study-result.ts';
import type { SheetBlock, SheetSection } from './sheet-blocks.ts';

/* The sheet's parts about the sequence networks and the faults at the point of interconnection. */

export const stateWords: Record<SheetState, string> = {
  none: 'sources alone',
  before: 'before the project',
  after: 'with the project',
};

const faultWords: Record<FaultKind, string> = {
  threePhase: 'Three-phase',
  lineGround: 'Line to ground',
  lineLine: 'Line to line',
  lineLineGround: 'Two lines to ground',
};

const states: readonly SheetState[] = ['none', 'before', 'after'];
const kinds: readonly FaultKind[] = ['threePhase', 'lineGround', 'lineLine', 'lineLineGround'];

export function layOutNetworks({ networks, poi }: Sheet): SheetSection {
  const isLateral = poi.phases !== 'ABC';
  const blocks: SheetBlock[] = [
    {
      kind: 'words',
      text:
        `Each sequence network seen from ${isLateral ? `where the lateral of ${poi.node} leaves the three phases` : poi.node}, per unit. Sources, machines, ` +
        'ground banks and the earthed star sides of star-delta transformers tie a network to ground; lines and other windings stand in series.',
    },
    {
      kind: 'table',
      caption: 'Impedances at the point of interconnection, per unit',
      columns: [
        { label: 'State', isFigure: false },
        ...['Z1', 'Z2', 'Z0'].map((label) => ({ label, isFigure: true })),
      ],
      rows: states.map((state) => [
        stateWords[state],
        ...(['positive', 'negative', 'zero'] as const).map((sequence) => {
          const z = findNetwork(networks, state, sequence)?.z ?? null;
          return z === null ? 'open' : formatValue(z, '');
        }),
      ]),
    },
  ];
  for (const network of networks) blocks.push(...layOutNetwork(network, isLastWord(network, networks)));
  return { id: 'networks', title: 'The three sequence networks', blocks };
}

function findNetwork(networks: readonly SheetNetwork[], state: SheetState, sequence: SequenceName) {
  return networks.find((each) => each.state === state && each.sequence === sequence);
}

/** Whether the state with the project is this one, or is the same as this one: the others are folded away on the screen. */
function isLastWord({ state, sequence }: SheetNetwork, networks: readonly SheetNetwork[]): boolean {
  const after = findNetwork(networks, 'after', sequence);
  return state === 'after' || after?.sameAs?.state === state;
}

function layOutNetwork(network: SheetNetwork, isOpen: boolean): SheetBlock[] {
  const { state, sequence, z, sameAs, isAddedUp, steps } = network;
  const title = `${sequence[0]!.toUpperCase()}${sequence.slice(1)} sequence, ${stateWords[state]}`;
  if (z === null) return [{ kind: 'words', text: `${title}: open, nothing ties this network to ground.` }];
  if (sameAs) {
    const as = `the ${sameAs.sequence} sequence, ${stateWords[sameAs.state]}`;
    return [{ kind: 'words', text: `${title}: the same as ${as}, ${formatValue(z, 'pu')}.` }];
  }
  const caution = `${title}: the network has loops and is reduced by elimination; its result is given.`;
  return [
    ...(isAddedUp ? [] : [{ kind: 'words' as const, text: caution }]),
    { kind: 'steps', caption: title, steps: steps.map(printStep), folds: !isOpen },
  ];
}

export function layOutFaults({ faults, networks, poi }: Sheet): SheetSection {
  const amps = (kind: FaultKind, state: SheetState) => {
    const found = faults.find((each) => each.kind === kind && each.state === state)?.amps ?? null;
    return found === null ? 'Not evaluated' : formatNumber(found, 1);
  };
  const blocks: SheetBlock[] = [
    {
      kind: 'table',
      caption: 'Bolted faults at the point of interconnection, largest phase current in A',
      columns: [
        { label: 'Fault', isFigure: false },
        ...states.map((state) => ({ label: stateWords[state], isFigure: true })),
      ],
      rows: kinds.map((kind) => [faultWords[kind], ...states.map((state) => amps(kind, state))]),
    },
  ];
  const reduced = Object.fromEntries(
    (['positive', 'negative', 'zero'] as const).map((sequence) => [
      sequence,
      findNetwork(networks, 'after', sequence)?.z ?? null,
    ]),
  ) as ReducedNetworks;
  for (const kind of kinds) {
    const own = faults.filter((each) => each.kind === kind && (each.steps.length > 0 || each.sameAs));
    if (own.length === 0) continue;
    blocks.push({ kind: 'heading', text: faultWords[kind], id: `fault-${kind}` });
    const drawing = drawSequenceNetworks(kind, reduced, poi.phases !== 'ABC');
    if (drawing) blocks.push({ kind: 'drawing', drawing });
    const lastWord = own.find(({ state }) => state === 'after')?.sameAs ?? 'after';
    blocks.push(...own.map((each) => layOutFault(each, each.state === lastWord)));
  }
  return { id: 'faults', title: 'Faults at the point of interconnection', blocks };
}

function layOutFault({ kind, state, amps, sameAs, steps }: SheetFault, isOpen: boolean): SheetBlock {
  if (sameAs) {
    const text = `${faultWords[kind]}, ${stateWords[state]}: the same steps as ${stateWords[sameAs]}, ${formatQuantity(amps, 'A', 1)}.`;
    return { kind: 'words', text };
  }
  return {
    kind: 'steps',
    caption: `${faultWords[kind]}, ${stateWords[state]}`,
    steps: steps.map(printStep),
    folds: !isOpen,
  };
}
