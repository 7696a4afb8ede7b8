import { describe, expect, test } from 'vitest';
import { answersWithIds, makeDemoApplications } from '../../../db/seeds/demo/applications.ts';
import { makeDemoEquipment } from '../../../db/seeds/demo/equipment.ts';
import { makeDemoModels } from '../../../db/seeds/demo/feeders.ts';
import { demoOrganisations, demoPeople } from '../../../db/seeds/demo/people.ts';
import { listProblems } from '../../../server/validate.ts';
import { findTransition, stages, type Stage } from '../../../shared/rules/application-life.ts';
import { sectionSchemas, type AnswerSection } from '../../../shared/schemas/answers.ts';
import {
  InverterNameplate,
  MachineNameplate,
  TransformerNameplate,
} from '../../../shared/schemas/equipment.ts';
import { roles } from '../../../shared/schemas/sessions.ts';

const applications = makeDemoApplications();
const equipment = new Map(makeDemoEquipment().map((record) => [record.code, record]));
const nodes = new Map(
  makeDemoModels().flatMap(({ content }) => content.feeder.nodes.map((node) => [node.id, node] as const)),
);

describe('the demo equipment', () => {
  test.each([...equipment.values()])('$code has ratings that the form would take', ({ kind, ratings }) => {
    const isInverter = kind.endsWith('inverter');
    const schema = isInverter
      ? InverterNameplate
      : kind === 'transformer'
        ? TransformerNameplate
        : MachineNameplate;
    expect(listProblems(schema, ratings)).toEqual([]);
  });

  test('has every kind, and codes and models that name one record each', () => {
    const records = [...equipment.values()];
    expect(new Set(records.map((record) => record.kind)).size).toBe(5);
    expect(records).toHaveLength(makeDemoEquipment().length);
    expect(new Set(records.map((record) => `${record.maker} ${record.model}`)).size).toBe(records.length);
  });
});

describe('the demo people', () => {
  test('show one account of each role on the sign-in page', () => {
    const listed = demoPeople.filter((person) => person.isListed).map((person) => person.role);
    expect([...listed].sort()).toEqual([...roles].sort());
  });

  test('belong to a known organisation if they are applicants, and to none if they are staff', () => {
    const known = new Set(demoOrganisations.map((organisation) => organisation.code));
    for (const { role, organisation, email } of demoPeople) {
      if (role === 'applicant') expect(known.has(organisation ?? ''), email).toBe(true);
      else expect(organisation, email).toBeNull();
      expect(email).toMatch(/@[a-z]+\.example$/);
    }
  });
});

describe('the demo applications', () => {
  test('made twice are the same to the last byte', () => {
    expect(JSON.stringify(makeDemoApplications())).toBe(JSON.stringify(applications));
  });

  test('are about forty and stand in every stage', () => {
    expect(applications.length).toBeGreaterThan(36);
    expect(applications.length).toBeLessThan(46);
    expect(new Set(applications.map((application) => application.stage))).toEqual(new Set(stages));
  });

  test.each(applications)(
    '$name went a way that the rules allow, each event after the one before',
    ({ events, stage }) => {
      expect(events[0]?.event).toBe('start');
      let at: Stage = 'draft';
      events.slice(1).forEach(({ event, toStage, daysAgo, byEmail }, i) => {
        const transition = findTransition(event, at);
        expect(transition?.to, event).toBe(toStage);
        expect(daysAgo).toBeLessThan(events[i]!.daysAgo);
        const role = demoPeople.find((person) => person.email === byEmail)?.role;
        expect(transition?.roles, event).toContain(role);
        at = toStage;
      });
      expect(at).toBe(stage);
      expect(events.at(-1)!.daysAgo).toBeGreaterThan(0);
    },
  );

  test.each(applications)('$name has answers that the form would take', ({ answers, stage }) => {
    const given = Object.entries(answersWithIds(answers, (code) => code)) as [AnswerSection, unknown][];
    for (const [section, value] of given)
      expect(listProblems(sectionSchemas[section], value), section).toEqual([]);
    if (stage !== 'draft')
      expect(given.map(([section]) => section).sort()).toEqual(Object.keys(sectionSchemas).sort());
  });

  test.each(applications)('$name fits together: units, transformer, phases and node', ({ answers, node }) => {
    const poi = nodes.get(node);
    expect(poi).toBeDefined();
    const units = answers.equipment!.units.map((unit) => {
      const record = equipment.get(unit.source === 'record' ? unit.equipmentId : '');
      expect(record).toBeDefined();
      return { count: unit.count, phases: record!.phases, ...(record!.ratings as InverterNameplate) };
    });
    const isOnePhase = units.every((unit) => unit.phases === 'one');
    expect(poi!.phases.length === 3).toBe(!isOnePhase);
    const transformer = answers.connection?.transformer;
    if (transformer?.rating.source === 'record') {
      const { kva, kvHigh, kvLow } = equipment.get(transformer.rating.equipmentId)!
        .ratings as TransformerNameplate;
      expect(kvHigh).toBe(poi!.kv);
      expect(new Set(units.map((unit) => unit.kv))).toEqual(new Set([kvLow]));
      expect(kva).toBeGreaterThanOrEqual(units.reduce((sum, unit) => sum + unit.kva * unit.count, 0));
    }
  });

  test('take places of their own, some steps from their pole', () => {
    expect(new Set(applications.map((application) => application.node)).size).toBe(applications.length);
    for (const { node, answers } of applications) {
      const [lng, lat] = nodes.get(node)!.position!;
      const { site } = answers;
      expect(Math.hypot((site!.lng - lng) * 91.6, (site!.lat - lat) * 110.9), node).toBeLessThan(0.08);
    }
  });

  test('leave a queue on every model', () => {
    const closed: Stage[] = ['withdrawn', 'denied', 'lapsed'];
    const inQueue = applications.filter(
      ({ stage, events }) =>
        !closed.includes(stage) && events.some(({ event }) => event === 'confirm-complete'),
    );
    for (const code of ['MB', 'PL', 'HC']) {
      expect(inQueue.filter(({ modelCode }) => modelCode === code).length, code).toBeGreaterThanOrEqual(4);
    }
  });
});

describe('answersWithIds', () => {
  test('puts the public ids in place of the codes and leaves the original alone', () => {
    const application = applications.find(({ name }) => name === 'Ridding quarry floor')!;
    const changed = answersWithIds(application.answers, (code) => `id of ${code}`);
    expect(changed.equipment?.units).toEqual([
      { source: 'record', equipmentId: 'id of quern-250', count: 3 },
    ]);
    expect(changed.connection?.transformer?.rating).toEqual({
      source: 'record',
      equipmentId: 'id of tarrant-12-750',
    });
    expect(application.answers.equipment?.units[0]).toMatchObject({ equipmentId: 'quern-250' });
  });
});
