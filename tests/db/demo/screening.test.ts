import { describe, expect, test } from 'vitest';
import { makeDemoEquipment } from '../../../db/seeds/demo/equipment.ts';
import { demoPlaces, makeDemoModels, type DemoModel } from '../../../db/seeds/demo/feeders.ts';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { MachineNameplate, TransformerNameplate } from '../../../shared/schemas/equipment.ts';
import type { StudyResult } from '../../../shared/schemas/study-result.ts';
import type { ElementLists, Neutral, Project, Study } from '../../../shared/schemas/study.ts';
import { studyFormat } from '../../../shared/schemas/study.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';

const models = makeDemoModels();

function getModel(code: string): DemoModel {
  const model = models.find((candidate) => candidate.code === code);
  if (!model) throw new Error(`got ${code}, expected a model of the demo`);
  return model;
}

function getRatings(code: string): unknown {
  return makeDemoEquipment().find((record) => record.code === code)?.ratings;
}

/** The nearest three-phase node of the primary, and how far it is. */
function snap(model: DemoModel, place: { lat: number; lng: number }) {
  const distances = model.content.feeder.nodes
    .filter((node) => node.phases === 'ABC' && node.kv > 1)
    .map((node) => {
      const [lng, lat] = node.position ?? model.place;
      return { id: node.id, km: Math.hypot((lng - place.lng) * 91.6, (lat - place.lat) * 110.9) };
    });
  return distances.sort((a, b) => a.km - b.km)[0]!;
}

function screen(
  code: string,
  node: string,
  transformerCode: string,
  connection: string,
  generators: ElementLists,
): StudyResult {
  const { kva, kvLow, impedancePercent, xr, zeroImpedancePercent } = getRatings(
    transformerCode,
  ) as TransformerNameplate;
  // A reactor, as the solar project has: a solid neutral would take too much from the feeder's own ground relays.
  const neutral: { neutralFrom?: Neutral } = connection.startsWith('YN')
    ? { neutralFrom: { r: 0, x: 40 } }
    : {};
  const project: Project = {
    id: 'project',
    node,
    nodes: [{ id: 'site', kv: kvLow, phases: 'ABC', with: 'generator' }],
    transformers: [
      {
        ...{ id: 'transformer', from: node, to: 'site', with: 'generator' },
        ...{ kva, connection, impedancePercent, xr, zeroImpedancePercent, ...neutral },
      },
    ],
    ...generators,
  };
  const study: Study = { format: studyFormat, ...getModel(code).content, project };
  const read = readStudy(JSON.stringify(study));
  if ('problems' in read) throw new Error(JSON.stringify(read.problems));
  return runStudy(read.study, proFormaRuleSet);
}

function verdictsOf(result: StudyResult): Record<string, string[]> {
  const byQuestion: Record<string, string[]> = {};
  for (const { id, verdict } of result.findings) (byQuestion[id] ??= []).push(verdict);
  return byQuestion;
}

describe('the demo models before any project', () => {
  test.each(models)('$code runs without a warning, with every device inside its rating', ({ content }) => {
    const result = runStudy({ format: studyFormat, ...content }, proFormaRuleSet);
    expect(result.warnings).toEqual([]);
    for (const [id, { before }] of Object.entries(result.devices)) {
      expect(before.availableLoading, id).toBeGreaterThan(0.01);
      expect(before.availableLoading, id).toBeLessThan(0.875);
    }
  });

  test.each([
    ['MB', 4.16],
    ['PL', 12.47],
    ['HC', 24.9],
  ] as const)('%s has a bus fault level between 60 and 300 MVA', (code, kv) => {
    const result = runStudy({ format: studyFormat, ...getModel(code).content }, proFormaRuleSet);
    const faultMva = (Math.sqrt(3) * kv * (result.nodes[`${code}-BUS`]?.none.threePhase ?? 0)) / 1000;
    expect(faultMva).toBeGreaterThan(60);
    expect(faultMva).toBeLessThan(300);
  });
});

describe('the two places of the demo', () => {
  test('a megawatt of solar at the one passes every question that is put to it', () => {
    const { id, km } = snap(getModel('HC'), demoPlaces.solarSite);
    expect(km).toBeLessThan(0.25);
    const inverter = {
      id: 'generator',
      node: 'site',
      phases: 'ABC',
      kva: 1000,
      faultCurrentPu: 1.2,
      listed: true,
      energy: 'photovoltaic' as const,
      listing: {
        ...{ standard: 'UL 1741', category: 'III' as const, profile: 'IEEE 1547-2018 defaults' },
        ...{ trdPercent: 2.5, loadRejectionPercent: 118, antiIslanding: true },
      },
    };
    const result = screen('HC', id, 'ivory-25-1250', 'YNd1', { inverters: [inverter] });
    const notWithin = result.findings.filter(({ verdict }) => verdict !== 'within');
    // No machine, no network, nothing on a service; breakers that trip for current out of the substation alone.
    expect(notWithin.map(({ id, verdict }) => `${id} ${verdict}`)).toEqual([
      'spot-network not-applicable',
      'shared-secondary not-applicable',
      'centre-tap-balance not-applicable',
      'effective-grounding not-applicable',
      'sympathetic-trip not-applicable',
      'service not-applicable',
    ]);
  });

  test('two megavolt-amperes of machine behind a delta at the other do not', () => {
    const { id, km } = snap(getModel('PL'), demoPlaces.machineSite);
    expect(km).toBeLessThan(0.25);
    const { kva, rPu, xSubtransientPu, x2Pu } = getRatings('bellweir-2000') as MachineNameplate;
    const machine = { id: 'generator', node: 'site', kva, rPu, xSubtransientPu, x2Pu } as const;
    const result = screen('PL', id, 'tarrant-12-2500', 'Dyn1', {
      machines: [{ ...machine, kind: 'synchronous', neutral: 'ungrounded' }],
    });
    const verdicts = verdictsOf(result);
    for (const question of [
      'contribution',
      'interrupting-duty',
      'transformer-connection',
      'effective-grounding',
    ]) {
      expect(verdicts[question], question).toContain('outside');
    }
  });
});
