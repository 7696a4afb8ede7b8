import { formatNumber, formatQuantity } from './format.ts';
import type { PreApplicationFigures, PreApplicationReport } from './schemas/pre-application-reports.ts';

/* How a pre-application report reads, on the screen and on paper alike. */

export interface ReportItem {
  label: string;
  value: string;
}

export interface ReportGroup {
  heading: string;
  items: ReportItem[];
}

const kilometresAMile = 1.609344;
const notKnown = 'Not in the utility’s records';

const known = (value: number | null, unit: string, decimals = 0) =>
  value === null ? notKnown : formatQuantity(value, unit, decimals);

const yesOrNo = (value: boolean | null) => (value === null ? notKnown : value ? 'Yes' : 'No');

const supplyWords: Record<PreApplicationFigures['supply'], string> = {
  radial: 'Radial',
  'closed-loop': 'Through a closed tie, from more than one side',
  'spot-network': 'A spot network',
  'area-network': 'An area network',
  'no-source': 'No source reaches it as the network stands',
};

const lineWords = { 'three-wire': 'Three-wire', 'four-wire': 'Four-wire, earthed neutral' } as const;

function describePlace({ figures, circuit, substation }: PreApplicationReport): ReportGroup {
  const { kv, highSideKv, phases, lineType, distanceKm, isMainline, supply } = figures;
  const miles = formatNumber(distanceKm / kilometresAMile, 2);
  return {
    heading: 'The place',
    items: [
      { label: 'Substation', value: substation },
      { label: 'Feeder', value: circuit },
      { label: 'Voltage of the feeder', value: formatQuantity(kv, 'kV', 2) },
      { label: 'Voltage on the substation’s high side', value: known(highSideKv, 'kV', 1) },
      { label: 'Phases at the place', value: phases },
      { label: 'Type of line', value: lineType === null ? notKnown : lineWords[lineType] },
      { label: 'How it is supplied', value: supplyWords[supply] },
      {
        label: 'Distance along the line to the substation',
        value: `${formatQuantity(distanceKm, 'km', 2)} (${miles} miles)`,
      },
      { label: 'On the mainline all the way', value: yesOrNo(isMainline) },
    ],
  };
}

function describeRoom(figures: PreApplicationFigures): ReportGroup {
  const size = (value: number) => formatQuantity(value, 'kW');
  return {
    heading: 'Capacity and generation',
    items: [
      { label: 'Capacity of the substation’s bank', value: known(figures.bankKva, 'kVA') },
      { label: 'Generation in service on the bank', value: size(figures.existingOnBankKw) },
      { label: 'Generation in the queue on the bank', value: size(figures.queuedOnBankKw) },
      { label: 'Left of the bank’s capacity', value: known(figures.availableOnBankKw, 'kW') },
      { label: 'Generation in service on the feeder', value: size(figures.existingOnCircuitKw) },
      { label: 'Generation in the queue on the feeder', value: size(figures.queuedOnCircuitKw) },
      { label: 'Peak load of the feeder', value: known(figures.circuitPeakKw, 'kW') },
      { label: 'Minimum load of the feeder', value: known(figures.circuitMinimumKw, 'kW') },
    ],
  };
}

function describeSections({ sections }: PreApplicationFigures): ReportGroup {
  const items = sections.flatMap((section, index): ReportItem[] => {
    const which = index === 0 ? 'nearest the place' : `number ${index + 1} towards the substation`;
    return [
      { label: `Line section ${which}: peak load`, value: known(section.peakKw, 'kW') },
      { label: `Line section ${which}: minimum load`, value: known(section.minimumKw, 'kW') },
      {
        label: `Line section ${which}: daytime minimum, 10 to 16 h and 8 to 18 h`,
        value: `${known(section.daytimeFixedKw, 'kW')}, ${known(section.daytimeTrackingKw, 'kW')}`,
      },
    ];
  });
  return {
    heading: 'Line sections on the way',
    items: items.length > 0 ? items : [{ label: 'Line sections', value: notKnown }],
  };
}

function describeWay(figures: PreApplicationFigures): ReportGroup {
  const devices = figures.devices.map(
    ({ kind, count, leastInterruptingKa: least, mostInterruptingKa: most }) => {
      const range =
        least === most ? known(least, 'kA', 1) : `${known(least, 'kA', 1)} to ${known(most, 'kA', 1)}`;
      return { label: `Protective devices on the way: ${kind}`, value: `${count}, rated ${range}` };
    },
  );
  return {
    heading: 'Equipment on the way and constraints',
    items: [
      ...(devices.length > 0 ? devices : [{ label: 'Protective devices on the way', value: 'None' }]),
      { label: 'Voltage regulators on the way', value: formatNumber(figures.regulators) },
      { label: 'Capacitor banks on the feeder', value: formatNumber(figures.capacitorsOnCircuit) },
      { label: 'Tap changer under load at the substation', value: yesOrNo(figures.hasTapChanger) },
      { label: 'Least current-carrying capacity on the way', value: known(figures.limitingAmpacityA, 'A') },
      { label: 'Three-phase fault current at the place', value: known(figures.threePhaseFaultA, 'A') },
      { label: 'Line-to-ground fault current at the place', value: known(figures.lineGroundFaultA, 'A') },
      {
        label: 'Devices on the way that stand near their interrupting rating already',
        value: formatNumber(figures.nearRating),
      },
      { label: 'A transient-stability limitation is posted', value: yesOrNo(figures.stabilityLimited) },
    ],
  };
}

const cautions = [
  'The report gives what the utility’s records and its network model said on that day. Nothing was measured for it.',
  'It is no screening of a project and reserves no capacity: others may apply before you do.',
  'Local codes and the utility’s own standards govern, and a licensed engineer decides on an application.',
  'Which items it lists follows section 1.2.3 of the federal pro forma procedures (list from memory).',
];

/** Every item of a report in groups, the place in one line, and how to read it. */
export function listPreApplicationItems(report: PreApplicationReport): {
  place: string;
  groups: ReportGroup[];
  cautions: readonly string[];
} {
  const { lat, lng, circuit, substation, figures } = report;
  return {
    place: `${lat.toFixed(5)}, ${lng.toFixed(5)}: feeder ${circuit}, ${substation}`,
    groups: [describePlace(report), describeRoom(figures), describeSections(figures), describeWay(figures)],
    cautions,
  };
}
