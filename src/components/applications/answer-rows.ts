import { formatNumber } from '../../../shared/format.ts';
import type { Answers, AnswerSection, EquipmentUnit, Neutral } from '../../../shared/schemas/answers.ts';
import type { EquipmentView } from '../../../shared/schemas/equipment.ts';
import { equipmentWords } from '../../../shared/wording.ts';
import { connectionWords } from './connection-words.ts';
import { listRatings } from './equipment-words.ts';

interface Row {
  key: string;
  term: string;
  value?: string | null;
  figure?: boolean;
}

function describeNeutral(neutral: Neutral): string {
  if (neutral.kind === 'solid') return 'Solidly grounded';
  if (neutral.kind === 'ungrounded') return 'Not grounded';
  return `Grounded through ${formatNumber(neutral.rOhm, 2)} + j${formatNumber(neutral.xOhm, 2)} Ω`;
}

const ratingsLine = (ratings: EquipmentView['ratings']) =>
  listRatings(ratings)
    .map(({ term, value }) => `${term} ${value}`)
    .join(' · ');

function describeUnit(unit: EquipmentUnit, records: readonly EquipmentView[]): string {
  if (unit.source === 'nameplate') {
    return `${unit.count} × ${equipmentWords[unit.kind]}, from the nameplate. ${ratingsLine(unit.nameplate)}`;
  }
  const record = records.find((candidate) => candidate.publicId === unit.equipmentId);
  if (!record) return `${unit.count} × a model of the records`;
  return `${unit.count} × ${record.maker} ${record.model} (${equipmentWords[record.kind]}). ${ratingsLine(record.ratings)}`;
}

function listConnection({ connection }: Answers, records: readonly EquipmentView[]): Row[] {
  if (!connection) return [];
  const rows: Row[] = [
    { key: 'phases', term: 'Phases', value: connection.phases === 'ABC' ? 'Three-phase' : 'One-phase' },
  ];
  const { transformer, machineNeutral } = connection;
  if (transformer) {
    const { rating } = transformer;
    const ratings =
      rating.source === 'nameplate'
        ? rating.nameplate
        : records.find((record) => record.publicId === rating.equipmentId)?.ratings;
    rows.push(
      { key: 'transformer', term: 'Transformer', value: ratings ? ratingsLine(ratings) : 'From the records' },
      { key: 'windings', term: 'Windings', value: connectionWords[transformer.windings] },
    );
    if (transformer.windings.startsWith('YN'))
      rows.push({
        key: 'utility',
        term: 'Utility-side neutral',
        value: describeNeutral(transformer.utilityNeutral),
      });
    if (transformer.windings.includes('yn'))
      rows.push({ key: 'site', term: 'Site-side neutral', value: describeNeutral(transformer.siteNeutral) });
  } else rows.push({ key: 'transformer', term: 'Transformer', value: 'None of its own' });
  if (machineNeutral)
    rows.push({ key: 'machine', term: 'Machine neutral', value: describeNeutral(machineNeutral) });
  if (connection.panelInterruptingKa !== undefined)
    rows.push({
      key: 'panel',
      term: 'Interrupting rating of the main panel',
      value: `${formatNumber(connection.panelInterruptingKa)} kA`,
    });
  return rows;
}

/** The answers of one part as term and value; empty when the part was not begun. */
export function listAnswers(
  section: AnswerSection,
  answers: Answers,
  records: readonly EquipmentView[],
): Row[] {
  const { project, site, equipment } = answers;
  if (section === 'project' && project) {
    return [
      { key: 'name', term: 'Project name', value: project.name },
      { key: 'contact', term: 'Person we write to', value: project.contactName },
      { key: 'email', term: 'E-mail address', value: project.contactEmail },
      { key: 'description', term: 'What is to be built', value: project.description },
    ];
  }
  if (section === 'site' && site) {
    return [
      { key: 'place', term: 'Place', value: `${site.lat.toFixed(5)}, ${site.lng.toFixed(5)}`, figure: true },
      { key: 'address', term: 'Address', value: site.address },
    ];
  }
  if (section === 'equipment' && equipment) {
    return [
      ...equipment.units.map((unit, index) => ({
        key: `unit-${index}`,
        term: `Units, group ${index + 1}`,
        value: describeUnit(unit, records),
      })),
      {
        key: 'export',
        term: 'Export limit',
        value:
          equipment.exportKw === undefined
            ? 'None: the full nameplate'
            : `${formatNumber(equipment.exportKw)} kW`,
      },
    ];
  }
  return section === 'connection' ? listConnection(answers, records) : [];
}
