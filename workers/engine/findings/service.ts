import type { ServiceTie, ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import { nodeAt } from '../model-parts.ts';
import { projectKva } from '../project-size.ts';
import { Working } from '../working.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import { numberOf } from './rule-parameters.ts';
import type { Screening } from './screening.ts';
import type { Generator, Tied } from './service-generators.ts';
import { findConnected, notConnectedNote, totalOf } from './service-generators.ts';
import { answerServicePanel } from './service-panel.ts';
import { answerServiceRise } from './service-rise.ts';

const id = 'service';

/**
 * Does the service transformer and drop carry it?
 * For each service transformer that the project's generators hang from: all generation on it at full export over its kVA; the
 * rise from its primary to the customer; and the fault current at the customer's panel over the panel's rating, from an
 * unlimited primary, which is on the safe side.
 */
export function answerService(screening: Screening): Answered[] {
  const { project } = screening;
  const generators: Generator[] = [...(project.machines ?? []), ...(project.inverters ?? [])];
  if (projectKva(project) === 0) {
    return [answer(screening, id, 'not-applicable', { note: 'The project has no generator.' })];
  }
  const tied = generators.flatMap((generator) => {
    const tie = generator.service ?? findTie(screening, generator);
    return tie ? [{ generator, tie }] : [];
  });
  const isTied = new Set(tied.map(({ generator }) => generator));
  const untold = generators.filter((each) => !isTied.has(each) && !isBehindOwn(screening, each));
  if (tied.length === 0) {
    const isOwn = untold.length === 0 || isOnPrimary(screening, untold);
    const note = isOwn
      ? `The project has a connection of its own to the primary.${describePanel(screening)}`
      : 'Which service transformer the project hangs from is not known.';
    return [answer(screening, id, isOwn ? 'not-applicable' : 'needs-data', { element: project.id, note })];
  }
  const byTransformer = new Map<string, Tied[]>();
  for (const each of tied) {
    byTransformer.set(each.tie.transformer, [...(byTransformer.get(each.tie.transformer) ?? []), each]);
  }
  // Beside a unit that names one, a unit that names none may hang from any.
  const missing = untold.map(({ id: element }) =>
    answer(screening, id, 'needs-data', {
      element,
      note: 'Which service transformer it hangs from is not known.',
    }),
  );
  const answers = [...byTransformer].flatMap(([name, each]) => {
    const transformer = screening.study.feeder.serviceTransformers?.find((record) => record.id === name);
    if (!transformer) {
      const note = 'The model has no record of this service transformer.';
      return [answer(screening, id, 'needs-data', { element: name, note })];
    }
    return [
      answerLoading(screening, transformer, each),
      answerServiceRise(screening, transformer, each),
      answerServicePanel(screening, transformer, each),
    ];
  });
  return [...answers, ...missing];
}

/** What stands behind a transformer of the project's own uses nobody's service. */
function isBehindOwn({ project }: Screening, { node }: Generator): boolean {
  return (project.transformers?.length ?? 0) > 0 && node !== project.node;
}

/**
 * Whether units that name no service transformer stand on the primary themselves: together too large for a service, at a
 * place where no service transformer is known, and nothing among them or about the place is low voltage.
 */
function isOnPrimary(screening: Screening, untold: readonly Generator[]): boolean {
  const { project, study, model } = screening;
  if (projectKva(project) <= numberOf(screening, id, 'ownConnectionAboveKva')) return false;
  const places = new Set([project.node, ...untold.map(({ node }) => node)]);
  if ((study.feeder.serviceTransformers ?? []).some(({ node }) => places.has(node))) return false;
  const isLow = (kv: number | undefined) => kv !== undefined && kv <= lowVoltageUpToKv;
  return !untold.some(
    ({ ratedKv, node }) => isLow(ratedKv) || isLow(nodeAt(model, model.nodeIndex.get(node)!).kv),
  );
}

const lowVoltageUpToKv = 1;

/** Of a small unit that names none: the only service transformer at its place. */
function findTie(screening: Screening, generator: Generator): ServiceTie | undefined {
  const { project, study } = screening;
  if (isBehindOwn(screening, generator)) return undefined;
  if (projectKva(project) > numberOf(screening, id, 'ownConnectionAboveKva')) return undefined;
  const [there, ...others] = (study.feeder.serviceTransformers ?? []).filter(
    ({ node }) => node === project.node,
  );
  return there && others.length === 0 ? { transformer: there.id } : undefined;
}

/** The panel of a site behind its own transformer is among what interrupts faults, where its rating is told. */
function describePanel({ project }: Screening): string {
  return project.panelInterruptingKa === undefined
    ? ' What its own panel can interrupt is not recorded, so the panel is not judged.'
    : ' Its panel is judged among the equipment that interrupts faults.';
}

function answerLoading(
  screening: Screening,
  transformer: ServiceTransformer,
  tied: readonly Tied[],
): Answered {
  const element = transformer.id;
  const connected = findConnected(screening, transformer);
  if (!connected) return answer(screening, id, 'needs-data', { element, note: notConnectedNote });
  const own = totalOf(tied.map(({ generator }) => generator));
  const kva = Math.hypot(connected.kw + own.kw, connected.kvar + own.kvar);
  const working = new Working();
  const p = working.given('P', 'All generation on it, the project included', connected.kw + own.kw, 'kW');
  const q = working.given('Q', 'Vars with it', connected.kvar + own.kvar, 'kvar');
  const rating = working.given('S_r', 'Rating of the service transformer', transformer.kva, 'kVA');
  const value = (kva / transformer.kva) * 100;
  working.compute(
    { symbol: 'loading', words: 'Loading', unit: '%' },
    'sqrt(P^2 + Q^2)/S_r*100',
    [p, q, rating],
    value,
  );
  return judge(screening, id, {
    element,
    value,
    before: (Math.hypot(connected.kw, connected.kvar) / transformer.kva) * 100,
    working: working.steps,
    note: `${round(connected.kw)} kW connected or ahead and ${round(own.kw)} kW of the project on ${transformer.kva} kVA.`,
  });
}

function round(value: number): number {
  return Number(value.toFixed(1));
}
