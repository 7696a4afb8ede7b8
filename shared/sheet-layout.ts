import { drawFaultProfile } from './drawings/fault-profile.ts';
import { drawOneLine } from './drawings/one-line.ts';
import { drawTimeCurrent } from './drawings/time-current.ts';
import { drawVoltageProfile } from './drawings/voltage-profile.ts';
import { summariseFindings } from './finding-words.ts';
import { formatNumber } from './format.ts';
import { printStep } from './quantity-words.ts';
import type { Sheet, SheetDevice } from './schemas/sheets.ts';
import type { SheetBlock, SheetPages, SheetSection } from './sheet-blocks.ts';
import { layOutFinding } from './sheet-findings.ts';
import { layOutFaults, layOutNetworks, stateWords } from './sheet-networks.ts';
import { caution } from './wording.ts';

/** Gives a working sheet its words and drawings, section by section, in the order in which it is read. */
export function layOutSheet(sheet: Sheet): SheetPages {
  const { origin } = sheet;
  return {
    title: 'Working sheet',
    reference: origin.reference ?? sheet.study,
    sections: [
      layOutTop(sheet),
      layOutBasis(sheet),
      layOutPath(sheet),
      layOutElements(sheet),
      layOutNetworks(sheet),
      layOutFaults(sheet),
      layOutDevices(sheet),
      ...layOutVoltage(sheet),
      ...layOutCoordination(sheet),
      layOutFindings(sheet),
      layOutSignature(sheet),
    ],
  };
}

function layOutTop({ study, origin, ruleSet, poi, method, cases, findings }: Sheet): SheetSection {
  const given = (term: string, value: string | undefined, isFigure = false) =>
    value === undefined || value === '' ? [] : [{ term, value, isFigure }];
  const methods = {
    prefault:
      'One voltage behind every source and machine before the fault, superposition of inverter currents',
    iec60909: 'IEC 60909-0, voltage factors and corrected impedances',
  };
  return {
    id: 'summary',
    title: 'What this sheet shows',
    blocks: [
      { kind: 'words', text: summariseFindings(findings.map(({ finding }) => finding)) },
      {
        kind: 'facts',
        facts: [
          ...given('Utility', origin.utility),
          ...given('Application', origin.reference),
          ...given('Network model', study),
          ...given('Point of interconnection', `${poi.node}, ${poi.kv} kV, phases ${poi.phases}`),
          ...given('Rule set', `${ruleSet.name}, version ${ruleSet.number}`),
          ...given('Method', methods[method]),
          ...given('Operating cases', cases.join('; ')),
          ...given('Computed', origin.computedAt),
          ...given('Run', origin.run, true),
          ...given('SHA-256 of the study file', origin.studySha256, true),
          ...given('SHA-256 of the result', origin.resultSha256, true),
        ],
      },
      { kind: 'caution', text: caution },
      {
        kind: 'words',
        text: 'Numbers have six digits that count. A step computed with the numbers printed beside it gives the printed result but for rounding; j is the imaginary unit, angles are in radians.',
      },
    ],
  };
}

function layOutBasis({ basis }: Sheet): SheetSection {
  return {
    id: 'basis',
    title: 'Per-unit basis',
    blocks: [{ kind: 'steps', caption: 'Bases', steps: basis.map(printStep) }],
  };
}

function layOutElements({ elements }: Sheet): SheetSection {
  return {
    id: 'elements',
    title: 'Elements, from the study file to per unit',
    blocks: [
      {
        kind: 'words',
        text: 'Index 1 is of the positive sequence, and of lines and windings in the negative too; 2 of the negative, 0 of the zero sequence. The number after it tells elements apart.',
      },
      {
        kind: 'steps',
        caption: 'Impedances of the elements',
        steps: elements.map(printStep),
        folds: elements.length > 12,
      },
    ],
  };
}

function layOutPath({ path }: Sheet): SheetSection {
  const blocks: SheetBlock[] = [
    { kind: 'drawing', drawing: drawOneLine(path) },
    { kind: 'drawing', drawing: drawFaultProfile(path) },
  ];
  return { id: 'path', title: 'From the source to the point of interconnection', blocks };
}

function layOutDevices({ devices, cases }: Sheet): SheetSection {
  const amps = (value: number | null) => (value === null ? 'Not evaluated' : formatNumber(value, 1));
  const percent = (value: number | null) => (value === null ? 'Not evaluated' : formatNumber(value, 2));
  const ordered = [...devices].sort((p, q) => (q.afterLoadingPercent ?? 0) - (p.afterLoadingPercent ?? 0));
  const worst = ordered.filter(
    (device): device is SheetDevice & { worst: object } => device.worst !== undefined,
  );
  const blocks: SheetBlock[] = [
    {
      kind: 'words',
      text: 'Duty is what the device itself must interrupt, the larger of a fault just outside and just inside its branch; available is the whole fault current at its place.',
    },
    {
      kind: 'table',
      caption: 'Devices, the most loaded first',
      columns: [
        ...['Device', 'Kind'].map((label) => ({ label, isFigure: false })),
        ...[
          'Rating, kA',
          'Duty before, A',
          'Duty with, A',
          'Available before, A',
          'Available with, A',
          'Of rating before, %',
          'Of rating with, %',
        ].map((label) => ({ label, isFigure: true })),
      ],
      rows: ordered.map((device) => [
        device.id,
        device.kind,
        device.interruptingKa === null ? 'Not given' : formatNumber(device.interruptingKa, 1),
        amps(device.beforeDutyA),
        amps(device.afterDutyA),
        amps(device.beforeAvailableA),
        amps(device.afterAvailableA),
        percent(device.beforeLoadingPercent),
        percent(device.afterLoadingPercent),
      ]),
    },
  ];
  if (worst.length > 0) {
    blocks.push({
      kind: 'table',
      caption: `Devices for which another of the ${cases.length} operating cases is worse`,
      columns: [
        ...['Device', 'Operating case', 'State'].map((label) => ({ label, isFigure: false })),
        ...['Available, A', 'Of rating, %'].map((label) => ({ label, isFigure: true })),
      ],
      rows: worst.map(({ id, worst: { scenario, state, availableA, loadingPercent } }) => [
        id,
        scenario,
        stateWords[state],
        amps(availableA),
        percent(loadingPercent),
      ]),
    });
  }
  return { id: 'devices', title: 'Duty of every device', blocks };
}

function layOutVoltage({ voltage = [] }: Sheet): SheetSection[] {
  if (voltage.length === 0) return [];
  const blocks = voltage.map((profile): SheetBlock => ({
    kind: 'drawing',
    drawing: drawVoltageProfile(profile),
  }));
  return [{ id: 'voltage', title: 'Voltage along the way', blocks }];
}

function layOutCoordination({ coordination }: Sheet): SheetSection[] {
  if (!coordination || coordination.devices.length === 0) return [];
  const drawings = (['phase', 'ground'] as const).flatMap(
    (element) => drawTimeCurrent(coordination, element) ?? [],
  );
  const pairs: SheetBlock[] = coordination.pairs.map(({ words }) => ({ kind: 'words', text: words }));
  const steps = coordination.working.map(printStep);
  return [
    {
      id: 'coordination',
      title: 'Tripping times of the devices on the way',
      blocks: [
        { kind: 'caution', text: coordination.caution },
        ...drawings.map((drawing): SheetBlock => ({ kind: 'drawing', drawing })),
        ...pairs,
        ...(steps.length > 0
          ? [{ kind: 'steps' as const, caption: 'Tripping times', steps, folds: true }]
          : []),
      ],
    },
  ];
}

function layOutFindings({ findings }: Sheet): SheetSection {
  return { id: 'findings', title: 'Findings and their working', blocks: findings.flatMap(layOutFinding) };
}

function layOutSignature({ warnings }: Sheet): SheetSection {
  const told = warnings.map((text): SheetBlock => ({ kind: 'words', text }));
  return {
    id: 'signature',
    title: 'Cautions and signature',
    blocks: [
      ...told,
      { kind: 'caution', text: caution },
      { kind: 'signature', lines: ['Engineer in charge', 'Licence', 'Date'] },
    ],
  };
}
