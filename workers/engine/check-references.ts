import type { Study } from '../../shared/schemas/study.ts';
import { describeValue } from './shape.ts';
import type { Problem } from './shape.ts';
import type { ElementKind } from './study-elements.ts';
import { eachElement } from './study-elements.ts';

/* That every id is used once and every reference leads somewhere. */

/** Which kinds share one set of ids: what refers to them must not be in doubt. */
const namespaces: Record<string, readonly ElementKind[]> = {
  node: ['nodes'],
  'line or transformer': ['lines', 'transformers'],
  'machine or inverter': ['machines', 'inverters'],
  source: ['sources'],
  switch: ['switches'],
  'grounding bank': ['groundingBanks'],
  load: ['loads'],
  device: ['devices'],
};

type Known = Map<string, { pointer: string; ofProject: boolean }>;

/** Notes duplicate ids, references to nothing, and elements that join a node to itself. */
export function checkReferences(study: Study, problems: Problem[]): void {
  const known = new Map(
    Object.entries(namespaces).map(([what, kinds]) => [what, collectIds(study, kinds, problems)]),
  );
  const refer = (what: string, id: string, pointer: string, ofProject: boolean) => {
    const target = known.get(what)!.get(id);
    // What belongs to the feeder is there without the project, so it cannot lean on the project's own elements.
    if (target && (ofProject || !target.ofProject)) return;
    const whose = target ? `of the feeder` : 'of this file';
    problems.push({ pointer, got: describeValue(id), expected: `the id of a ${what} ${whose}` });
  };

  for (const kind of ['sources', 'groundingBanks', 'machines', 'inverters', 'loads'] as const) {
    for (const { element, pointer, ofProject } of eachElement(study, kind)) {
      refer('node', element.node, `${pointer}/node`, ofProject);
    }
  }
  for (const kind of ['lines', 'transformers', 'switches'] as const) {
    for (const { element, pointer, ofProject } of eachElement(study, kind)) {
      refer('node', element.from, `${pointer}/from`, ofProject);
      refer('node', element.to, `${pointer}/to`, ofProject);
      if (element.from !== element.to) continue;
      problems.push({
        pointer: `${pointer}/to`,
        got: describeValue(element.to),
        expected: 'another node than `from`',
      });
    }
  }
  for (const kind of ['nodes', 'lines', 'transformers', 'switches', 'groundingBanks', 'loads'] as const) {
    for (const { element, pointer, ofProject } of eachElement(study, kind)) {
      if (element.with !== undefined)
        refer('machine or inverter', element.with, `${pointer}/with`, ofProject);
    }
  }
  for (const { element, pointer, ofProject } of eachElement(study, 'devices')) {
    refer('line or transformer', element.branch, `${pointer}/branch`, ofProject);
  }
  checkFeederLists(study, problems, refer);
  if (study.project) refer('node', study.project.node, '/project/node', false);
}

function checkFeederLists(
  { feeder }: Study,
  problems: Problem[],
  refer: (what: string, id: string, pointer: string, ofProject: boolean) => void,
): void {
  for (const list of ['sections', 'circuits'] as const) {
    const seen: Known = new Map();
    (feeder[list] ?? []).forEach(({ id }, index) =>
      noteId(seen, id, `/feeder/${list}/${index}`, false, problems),
    );
  }
  (feeder.sections ?? []).forEach(({ device }, index) => {
    refer('device', device, `/feeder/sections/${index}/device`, false);
  });
}

function collectIds(study: Study, kinds: readonly ElementKind[], problems: Problem[]): Known {
  const known: Known = new Map();
  for (const kind of kinds) {
    for (const { element, pointer, ofProject } of eachElement(study, kind)) {
      noteId(known, element.id, pointer, ofProject, problems);
    }
  }
  return known;
}

function noteId(known: Known, id: string, pointer: string, ofProject: boolean, problems: Problem[]): void {
  const first = known.get(id);
  if (!first) known.set(id, { pointer, ofProject });
  else {
    const expected = `an id of its own (${first.pointer} has this one)`;
    problems.push({ pointer: `${pointer}/id`, got: describeValue(id), expected });
  }
}
