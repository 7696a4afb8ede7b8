import { findTransition, type ApplicationEvent, type Stage } from '../../../shared/rules/application-life.ts';
import type { Answers, AnswerSection, ConnectionAnswers, Neutral } from '../../../shared/schemas/answers.ts';
import { makeDemoEquipment, type DemoEquipment } from './equipment.ts';
import { chooseSite, type Site } from './application-sites.ts';
import { makeDemoCircuits } from './feeders.ts';
import { demoPeople } from './people.ts';
import { at } from './plane.ts';
import { makeDice, type Dice } from './random.ts';
import type { Scenario } from './scenario.ts';
import { arrivingScenarios } from './scenarios-arriving.ts';
import { reviewingScenarios } from './scenarios-reviewing.ts';
import { settledScenarios } from './scenarios-settled.ts';

export interface DemoEvent {
  event: ApplicationEvent;
  toStage: Stage;
  /** Whole and part days before the seed is planted; 0 is that moment. */
  daysAgo: number;
  byEmail: string;
  note: string | null;
}

export interface DemoApplication {
  organisation: string;
  applicantEmail: string;
  reviewerEmail: string | null;
  name: string;
  stage: Stage;
  /** In the order of time; the first is 'start'. */
  events: DemoEvent[];
  /** Answers with equipment codes where the product has public ids: see `answersWithIds`. */
  answers: Answers;
  /** What was asked for at 'ask-for-missing'. */
  missing: { section: AnswerSection; text: string }[];
  conditions: string | null;
  /** The feeder that the site was chosen on, and the node nearest to it. */
  modelCode: string;
  circuit: string;
  node: string;
}

/** Days that usually pass before an event, after the one before it. */
const usualDays: Record<ApplicationEvent, readonly [number, number]> = {
  start: [0, 0],
  submit: [1, 5],
  'ask-for-missing': [3, 7],
  resubmit: [4, 9],
  'confirm-complete': [3, 8],
  'offer-supplemental': [12, 18],
  'accept-supplemental': [5, 11],
  'require-study': [12, 19],
  'begin-feasibility': [8, 14],
  'begin-system-impact': [10, 20],
  'begin-facilities': [28, 40],
  approve: [10, 18],
  deny: [25, 35],
  'tender-agreement': [4, 7],
  'execute-agreement': [8, 20],
  'schedule-witness-test': [20, 45],
  'permit-operation': [3, 9],
  withdraw: [6, 16],
  lapse: [30, 45],
};

const usualNotes: Partial<Record<ApplicationEvent, string>> = {
  'offer-supplemental':
    'One question of the initial review is outside its limit. Supplemental review is offered.',
  'accept-supplemental': 'The applicant accepted the supplemental review and paid its deposit.',
  'require-study':
    'The questions of the review are outside their limits and cannot be answered without a study.',
  'begin-feasibility': 'The agreement for the feasibility study is signed and the deposit is paid.',
  'begin-system-impact': 'The agreement for the system impact study is signed and the deposit is paid.',
  'begin-facilities':
    'The impact study is done. The facilities study settles what is built and what it costs.',
  approve: 'Every question is within its limit, or was answered in the review or the study.',
  'tender-agreement': 'The agreement was sent to the applicant for signature.',
  'execute-agreement': 'Both signatures are on the agreement.',
  'schedule-witness-test': 'The witness test is agreed with the applicant.',
  'permit-operation': 'The witness test was passed and the meter is set.',
};

const round = (value: number, decimals: number) => Math.round(value * 10 ** decimals) / 10 ** decimals;

/** Counts back from the last event; who acts is what the rules say. */
function makeEvents(scenario: Scenario, dice: Dice): DemoEvent[] {
  const events: DemoEvent[] = [];
  let stage: Stage = 'draft';
  for (const event of scenario.path) {
    const transition = findTransition(event, stage);
    if (transition) stage = transition.to;
    else if (event !== 'start') {
      throw new Error(
        `${scenario.name}: got ${event} in stage ${stage}, expected an event that can happen there`,
      );
    }
    const byStaff = transition !== undefined && !transition.roles.includes('applicant');
    const byEmail = byStaff ? (scenario.reviewerEmail ?? 'yuki@marrowbank.example') : scenario.applicantEmail;
    events.push({
      event,
      toStage: stage,
      daysAgo: 0,
      byEmail,
      note: scenario.notes?.[event] ?? usualNotes[event] ?? null,
    });
  }
  let daysAgo = scenario.lastEventDaysAgo + 0.1;
  for (let i = events.length - 1; i >= 0; i -= 1) {
    at(events, i).daysAgo = round(daysAgo, 3);
    daysAgo += dice.between(...usualDays[at(events, i).event]);
  }
  return events;
}

function phasesOf(records: readonly DemoEquipment[]): 'ABC' | 'one' {
  return records.every((record) => record.phases === 'one') ? 'one' : 'ABC';
}

function utilityNeutralOf(windings: string, reactorOhm: number | undefined): Neutral {
  if (!windings.startsWith('YN')) return { kind: 'ungrounded' };
  return reactorOhm === undefined ? { kind: 'solid' } : { kind: 'impedance', rOhm: 0, xOhm: reactorOhm };
}

function makeConnection(scenario: Scenario, records: readonly DemoEquipment[]): ConnectionAnswers {
  const connection: ConnectionAnswers = { phases: phasesOf(records) };
  // A house's panel; what has a transformer of its own has switchgear of its own.
  if (connection.phases === 'one') connection.panelInterruptingKa = 10;
  if (scenario.transformer) {
    const [equipmentId, windings] = scenario.transformer;
    connection.transformer = {
      rating: { source: 'record', equipmentId },
      windings,
      utilityNeutral: utilityNeutralOf(windings, scenario.utilityNeutralOhm),
      siteNeutral: { kind: windings.includes('yn') ? 'solid' : 'ungrounded' },
    };
  }
  if (records.some((record) => record.kind.endsWith('machine')))
    connection.machineNeutral = { kind: scenario.machineNeutral ?? 'ungrounded' };
  return connection;
}

function makeAnswers(scenario: Scenario, site: Site, records: readonly DemoEquipment[]): Answers {
  const contact = demoPeople.find((person) => person.email === scenario.applicantEmail);
  const answers: Answers = {
    project: {
      name: scenario.name,
      contactName: contact?.name ?? scenario.applicantEmail,
      contactEmail: scenario.applicantEmail,
      description: scenario.description,
    },
    site: { lat: site.lat, lng: site.lng },
    equipment: {
      units: scenario.units.map(([equipmentId, count]) => ({ source: 'record', equipmentId, count })),
      ...(scenario.exportKw === undefined ? {} : { exportKw: scenario.exportKw }),
    },
  };
  // A draft is not finished: its connection is still open.
  if (scenario.path.length === 1) return answers;
  return { ...answers, connection: makeConnection(scenario, records), papers: { files: [] } };
}

/** The demo's applications, oldest start first: the order in which they would have got their numbers. */
export function makeDemoApplications(): DemoApplication[] {
  const circuits = makeDemoCircuits();
  const dice = makeDice(7621);
  const used = new Set<string>();
  const equipment = makeDemoEquipment();
  const applications = [...arrivingScenarios, ...reviewingScenarios, ...settledScenarios].map((scenario) => {
    const records = equipment.filter((record) => scenario.units.some(([code]) => code === record.code));
    const site = chooseSite(scenario, phasesOf(records), circuits, used, dice);
    const events = makeEvents(scenario, dice);
    return {
      organisation: demoPeople.find((person) => person.email === scenario.applicantEmail)?.organisation ?? '',
      applicantEmail: scenario.applicantEmail,
      reviewerEmail: scenario.reviewerEmail,
      name: scenario.name,
      stage: at(events, -1).toStage,
      events,
      answers: makeAnswers(scenario, site, records),
      missing: [...(scenario.missing ?? [])],
      conditions: scenario.conditions ?? null,
      modelCode: site.modelCode,
      circuit: scenario.circuit,
      node: site.node,
    };
  });
  return applications.sort((a, b) => at(b.events, 0).daysAgo - at(a.events, 0).daysAgo);
}

/** The same answers as the product keeps them: equipment codes replaced by the public ids of the seeded records. */
export function answersWithIds(answers: Answers, publicIdOf: (code: string) => string): Answers {
  const copy = structuredClone(answers);
  for (const unit of copy.equipment?.units ?? []) {
    if (unit.source === 'record') unit.equipmentId = publicIdOf(unit.equipmentId);
  }
  const rating = copy.connection?.transformer?.rating;
  if (rating?.source === 'record') rating.equipmentId = publicIdOf(rating.equipmentId);
  return copy;
}
