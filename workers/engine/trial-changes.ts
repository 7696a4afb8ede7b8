import type { Neutral as NeutralAnswer } from '../../shared/schemas/answers.ts';
import type { ElementLists, Neutral, Project, Transformer } from '../../shared/schemas/study.ts';
import type { TrialChange } from '../../shared/schemas/trials.ts';
import type { ProjectStudy } from './findings/make-screening.ts';
import { describeValue } from './problems.ts';
import { projectKva } from './project-size.ts';

/* What each kind of change makes of a study; nothing that was handed in is changed in place. */

type ChangeOf<K extends TrialChange['kind']> = Extract<TrialChange, { kind: K }>;

/** What is wrong with a change: the field, what it names, what was expected. */
export class ChangeProblem extends Error {
  override name = 'ChangeProblem';
  readonly field: string;
  readonly got: string;
  readonly expected: string;

  constructor(field: string, got: unknown, expected: string) {
    super(`${field}: got ${describeValue(got)}, expected ${expected}`);
    this.field = field;
    this.got = describeValue(got);
    this.expected = expected;
  }
}

type Apply<K extends TrialChange['kind']> = (study: ProjectStudy, change: ChangeOf<K>) => ProjectStudy;

function withProject(study: ProjectStudy, differs: Partial<Project>): ProjectStudy {
  return { ...study, project: { ...study.project, ...differs } };
}

/** The list with one element changed; a name that is not in it is a problem. */
function changeOne<E extends { id: string }>(
  list: readonly E[] | undefined,
  id: string,
  what: string,
  make: (element: E) => E,
): E[] {
  const elements = list ?? [];
  if (!elements.some((each) => each.id === id)) throw new ChangeProblem('element', id, `the id of ${what}`);
  return elements.map((each) => (each.id === id ? make(each) : each));
}

/** Size of each generator times a factor, and with it what it may send out; transformers stay as they are. */
const scaleProject: Apply<'size'> = (study, { factor }) => {
  const scaled = <G extends { kva: number; exportKw?: number }>(generator: G): G => ({
    ...generator,
    kva: generator.kva * factor,
    ...(generator.exportKw !== undefined && { exportKw: generator.exportKw * factor }),
  });
  const { machines, inverters } = study.project;
  return withProject(study, {
    ...(machines && { machines: machines.map(scaled) }),
    ...(inverters && { inverters: inverters.map(scaled) }),
  });
};

/** What may be sent out, shared among the generators by size. */
const limitExport: Apply<'export-limit'> = (study, { kw }) => {
  const total = projectKva(study.project);
  const limited = <G extends { kva: number; exportKw?: number }>({ exportKw: _, ...rest }: G): G =>
    (kw === null ? rest : { ...rest, exportKw: (kw * rest.kva) / total }) as G;
  const { machines, inverters } = study.project;
  return withProject(study, {
    ...(machines && { machines: machines.map(limited) }),
    ...(inverters && { inverters: inverters.map(limited) }),
  });
};

const setPowerFactor: Apply<'power-factor'> = (study, { absorbs, powerFactor }) => {
  const set = <G extends object>(generator: G) => ({
    ...generator,
    powerFactor: absorbs ? -powerFactor : powerFactor,
  });
  const { machines, inverters } = study.project;
  return withProject(study, {
    ...(machines && { machines: machines.map(set) }),
    ...(inverters && { inverters: inverters.map(set) }),
  });
};

const setFaultCurrent: Apply<'fault-current'> = (study, { perUnit }) => {
  const { inverters = [] } = study.project;
  if (inverters.length === 0) throw new ChangeProblem('kind', 'fault-current', 'a project with inverters');
  return withProject(study, {
    inverters: inverters.map((inverter) => ({ ...inverter, faultCurrentPu: perUnit })),
  });
};

function toNeutral(answer: NeutralAnswer): Neutral {
  if (answer.kind !== 'impedance') return answer.kind;
  // No impedance at all is a solid connection.
  return answer.rOhm === 0 && answer.xOhm === 0 ? 'solid' : { r: answer.rOhm, x: answer.xOhm };
}

const bringsOut = { neutralFrom: /^YN/, neutralTo: /yn/ };

function changeTransformer(transformer: Transformer, change: ChangeOf<'transformer'>): Transformer {
  const { kind: _, element: __, neutralFrom, neutralTo, ...ratings } = change;
  const changed: Transformer = {
    ...transformer,
    ...ratings,
    ...(neutralFrom && { neutralFrom: toNeutral(neutralFrom) }),
    ...(neutralTo && { neutralTo: toNeutral(neutralTo) }),
  };
  for (const side of ['From', 'To'] as const) {
    const field = `neutral${side}` as const;
    if (bringsOut[field].test(changed.connection)) continue;
    if (change[field])
      throw new ChangeProblem(field, changed.connection, 'windings that bring this neutral out');
    // What the other windings had at their neutral goes with them.
    delete changed[field];
  }
  return changed;
}

const setTransformer: Apply<'transformer'> = (study, change) =>
  withProject(study, {
    transformers: changeOne(
      study.project.transformers,
      change.element,
      "one of the project's transformers",
      (each) => changeTransformer(each, change),
    ),
  });

const setMachineNeutral: Apply<'machine-neutral'> = (study, change) =>
  withProject(study, {
    machines: changeOne(
      study.project.machines,
      change.element,
      "one of the project's machines",
      (machine) => {
        const neutral = toNeutral(change.neutral);
        if (machine.kind === 'induction')
          throw new ChangeProblem('element', change.element, 'a synchronous machine');
        if (neutral !== 'ungrounded' && machine.x0Pu === undefined) {
          throw new ChangeProblem(
            'element',
            change.element,
            'a machine whose zero-sequence reactance is known',
          );
        }
        return { ...machine, neutral };
      },
    ),
  });

function listPlaces({ project }: ProjectStudy): string[] {
  return [project.node, ...(project.nodes ?? []).map(({ id }) => id)];
}

const addBank: Apply<'add-bank'> = (study, { node, rOhm, xOhm }) => {
  const places = listPlaces(study);
  if (!places.includes(node)) throw new ChangeProblem('node', node, `one of ${places.join(', ')}`);
  const { groundingBanks = [] } = study.project;
  const known = new Set([...(study.feeder.groundingBanks ?? []), ...groundingBanks].map(({ id }) => id));
  let number = 1;
  while (known.has(`trial-bank-${number}`)) number++;
  const bank = { id: `trial-bank-${number}`, node, z0: { r: rOhm, x: xOhm } };
  return withProject(study, { groundingBanks: [...groundingBanks, bank] });
};

/** Changes a list where the element is: the project's, else the feeder's. */
function changeWhereItIs<K extends 'groundingBanks' | 'devices'>(
  study: ProjectStudy,
  list: K,
  id: string,
  make: (elements: ElementLists[K]) => ElementLists[K],
): ProjectStudy {
  const isOfProject = study.project[list]?.some((each) => each.id === id) ?? false;
  if (isOfProject) return withProject(study, { [list]: make(study.project[list]) });
  return { ...study, feeder: { ...study.feeder, [list]: make(study.feeder[list]) } };
}

const changeBank: Apply<'change-bank'> = (study, { element, rOhm, xOhm }) =>
  changeWhereItIs(study, 'groundingBanks', element, (banks) =>
    changeOne(banks, element, 'a ground bank', (bank) => ({ ...bank, z0: { r: rOhm, x: xOhm } })),
  );

const removeBank: Apply<'remove-bank'> = (study, { element }) =>
  changeWhereItIs(study, 'groundingBanks', element, (banks) =>
    changeOne(banks, element, 'a ground bank', (bank) => bank).filter(({ id }) => id !== element),
  );

const setDevice: Apply<'device'> = (study, { kind: _, element, ...settings }) =>
  changeWhereItIs(study, 'devices', element, (devices) =>
    changeOne(devices, element, 'a device', (device) => ({ ...device, ...settings })),
  );

const appliers: { [K in TrialChange['kind']]: Apply<K> } = {
  size: scaleProject,
  'export-limit': limitExport,
  'power-factor': setPowerFactor,
  'fault-current': setFaultCurrent,
  transformer: setTransformer,
  'machine-neutral': setMachineNeutral,
  'add-bank': addBank,
  'change-bank': changeBank,
  'remove-bank': removeBank,
  device: setDevice,
};

/** Makes one change; throws a ChangeProblem where it names what is not there. */
export function applyChange<K extends TrialChange['kind']>(
  study: ProjectStudy,
  change: ChangeOf<K>,
): ProjectStudy {
  return (appliers[change.kind] as Apply<K>)(study, change);
}
