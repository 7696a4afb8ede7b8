import type { Regulator, Substation } from '../../../shared/schemas/study-utility.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import type { NetExport } from '../flow/net-export.ts';
import { addUpExports, findReversePhase } from '../flow/net-export.ts';
import { projectKva } from '../project-size.ts';
import { Working } from '../working.ts';
import type { Rated } from './export-ratings.ts';
import { percentOf, ratingsAt, workLoading, workNothing } from './export-ratings.ts';
import { listFedCases, notFedNote } from './fed-cases.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import type { Upstream } from './upstream.ts';
import { traceCuts } from './upstream.ts';

const id = 'reverse-flow';

type Loaded = Rated & { operating: OperatingCase; sum: NetExport; percent: number };

/** What is loaded most so far: a long way has too many branches to keep them all. */
type Loadings = { worst: Loaded | undefined };

/**
 * Can lines, transformers and regulators carry the export?
 * All generation beyond each line and transformer on the way to the source, at full export, less the minimum load there,
 * over its rating, phase by phase; the worst decides. Findings of their own: what power flows back through without a known
 * rating, regulators that cannot run backwards, and a substation where power may not flow back.
 */
export function answerReverseFlow(screening: Screening): Answered[] {
  if (projectKva(screening.project) === 0) {
    return [answer(screening, id, 'not-applicable', { note: 'The project has no generator.' })];
  }
  const loaded: Loadings = { worst: undefined };
  const others = new Map<string, Answered>();
  const note = (found: Answered) => {
    if (!others.has(found.element!)) others.set(found.element!, found);
  };
  const fed = listFedCases(screening);
  if (fed.length === 0)
    return [answer(screening, id, 'needs-data', { element: screening.project.node, note: notFedNote })];
  for (const operating of fed) {
    const looped = walk(screening, operating, loaded, note);
    if (looped) return [looped];
  }
  const worst = answerWorst(screening, loaded.worst);
  // What is loaded most may have a control to answer for too.
  const named = others.has(worst.element!) ? { ...worst, element: `${worst.element!} (loading)` } : worst;
  return [named, ...others.values()];
}

/** Goes through what lies on the way in one operating case; gives a finding where a loop leaves the way open. */
function walk(
  screening: Screening,
  operating: OperatingCase,
  loaded: Loadings,
  note: (found: Answered) => void,
): Answered | undefined {
  const { model, poi, project, study } = screening;
  const { upstream } = operating;
  const deciding = describeDeciding(screening.cases, operating);
  const cuts = traceCuts(upstream);
  const open = cuts.isCut.findIndex((isCut) => !isCut);
  if (open !== -1) {
    const { id: element } = branchAt(model, upstream.branches[open]!);
    const text = `There is another way to a source besides ${element}, so how the export divides takes a study.`;
    const found = answer(screening, id, 'needs-data', { element, note: [text, ...deciding].join(' ') });
    return { ...found, consequence: 'study' };
  }
  if (upstream.branches.length === 0 && countSources(upstream, poi) > 1) {
    const text = 'Several sources meet here, so how the export divides takes a study.';
    const note = [text, ...deciding].join(' ');
    return { ...answer(screening, id, 'needs-data', { element: project.node, note }), consequence: 'study' };
  }
  const { choice } = operating.solver.solve('after', nodeAt(model, poi).kv);
  const sums = addUpExports(screening, choice, cuts, upstream.branches.length);
  const unrated: string[] = [];
  const load = (rated: Rated, sum: NetExport) => {
    const percent = percentOf(rated, sum);
    if (percent === undefined) unrated.push(rated.element);
    else if (!loaded.worst || percent > loaded.worst.percent + 1e-9)
      loaded.worst = { ...rated, operating, sum, percent };
  };
  upstream.branches.forEach((branch, place) => {
    const sum = sums[place]!;
    for (const rated of ratingsAt(screening, branch)) load(rated, sum);
    if (!findReversePhase(sum)) return;
    const { id: name } = branchAt(model, branch);
    for (const regulator of study.feeder.regulators ?? []) {
      if (regulator.branch === name) checkRegulator(screening, regulator, note);
    }
    for (const substation of study.feeder.substations ?? []) {
      if (substation.transformer === name) checkSubstation(screening, substation, sum, note);
    }
  });
  const outermost = sums.at(-1);
  const [substation, ...furtherOnes] = study.feeder.substations ?? [];
  // A bank that the model does not have stands behind its source.
  if (outermost && substation && !substation.transformer && furtherOnes.length === 0) {
    const rated = {
      element: substation.id,
      kv: nodeAt(model, upstream.path.at(-1)!).kv,
      kva: substation.kva,
    };
    load(rated, outermost);
    if (findReversePhase(outermost)) checkSubstation(screening, substation, outermost, note);
  }
  if (unrated.length > 0) {
    const more = unrated.length > 1 ? ` and of ${unrated.length - 1} more on the way` : '';
    const text = `Power flows back through it, and its rating${more} is not known.`;
    note(answer(screening, id, 'needs-data', { element: unrated[0]!, note: [text, ...deciding].join(' ') }));
  }
  return undefined;
}

/** How many source nodes can be reached from a node. */
function countSources({ graph, isSource }: Upstream, node: number): number {
  const isSeen = new Uint8Array(isSource.length);
  isSeen[node] = 1;
  const queue = [node];
  let count = 0;
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    count += isSource[u]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (isSeen[v]) continue;
      isSeen[v] = 1;
      queue.push(v);
    }
  }
  return count;
}

function checkRegulator(
  screening: Screening,
  { id: element, reverse }: Regulator,
  note: (found: Answered) => void,
) {
  if (reverse === 'bidirectional' || reverse === 'cogeneration') return;
  const text =
    reverse === 'locked'
      ? 'Power flows back through this regulator, whose control stays where it is then.'
      : 'Power flows back through this regulator; what its control does then is not known.';
  note(answer(screening, id, reverse === 'locked' ? 'outside' : 'needs-data', { element, note: text }));
}

function checkSubstation(
  screening: Screening,
  { id: element, reverseFlow, minimumKw }: Substation,
  { generationKw, loadKw, unknownLoads }: NetExport,
  note: (found: Answered) => void,
) {
  // Where loads are not known one by one, what was measured of them all counts.
  const minimum = unknownLoads > 0 && minimumKw !== undefined ? minimumKw : loadKw;
  if (reverseFlow === true || generationKw <= minimum) return;
  const flows = `${kilowatts(generationKw)} of generation against ${kilowatts(minimum)} of minimum load: power flows back through the substation`;
  note(
    reverseFlow === false
      ? answer(screening, id, 'outside', { element, note: `${flows}, where it may not.` })
      : answer(screening, id, 'needs-data', { element, note: `${flows}; whether it may is not known.` }),
  );
}

function answerWorst(screening: Screening, worst: Loaded | undefined): Answered {
  if (!worst) {
    const note = 'No line or transformer with a known rating lies between the source and the project.';
    return answer(screening, id, 'needs-data', { element: screening.project.node, note });
  }
  const { element, percent, sum, operating } = worst;
  const working = new Working();
  const flow = `${kilowatts(sum.generationKw)} of generation beyond it at full export, ${kilowatts(sum.loadKw)} of minimum load`;
  if (percent === 0) workNothing(sum, working);
  else workLoading(worst, working);
  const unknown =
    sum.unknownLoads > 0
      ? [`The minimum of ${sum.unknownLoads} loads is not known and counts as nothing.`]
      : [];
  const note = [`${flow}.`, ...unknown, ...describeDeciding(screening.cases, operating)].join(' ');
  const finding = judge(screening, id, { element, value: percent, working: working.steps, note });
  // What is too much without these loads need not be with them.
  if (finding.verdict === 'outside' && sum.unknownLoads > 0)
    return answer(screening, id, 'needs-data', { element, note });
  return finding;
}

function kilowatts(size: number): string {
  return `${Number(size.toFixed(1))} kW`;
}
