import type { Device } from '../../../shared/schemas/study.ts';
import type { Section } from '../../../shared/schemas/study-utility.ts';
import { traceStandings } from './blocks.ts';
import type { Generator } from './island-generation.ts';
import { listGenerators } from './island-generation.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { listSectionalizing, traceCuts } from './upstream.ts';

/* The line sections that the point of interconnection lies in, one within the other. */

/** One section in one operating case. */
export type NestedSection = {
  readonly section: Section;
  readonly operating: OperatingCase;
  /** The generators in service in it; nothing where its device has a way round it. */
  readonly generators: readonly Generator[] | undefined;
};

export type NestedSections = {
  readonly sections: readonly NestedSection[];
  /** Devices on the way that open by themselves and that no section of the study is named for. */
  readonly unlisted: readonly Device[];
  /** The operating cases in which no section is known to hold the point of interconnection. */
  readonly without: readonly OperatingCase[];
};

const known = new WeakMap<Screening, NestedSections>();

/** Lists the nested sections of every operating case; they are looked for once for all questions. */
export function listNestedSections(screening: Screening): NestedSections {
  let nested = known.get(screening);
  if (!nested) known.set(screening, (nested = findNestedSections(screening)));
  return nested;
}

function findNestedSections(screening: Screening): NestedSections {
  const { study, cases } = screening;
  const found = cases.map((operating) => findInCase(screening, operating));
  const named = new Set((study.feeder.sections ?? []).map(({ device }) => device));
  const devices = cases.flatMap(({ solver, upstream }) => {
    const out = new Set(solver.scenario?.out);
    return listSectionalizing(study, screening.model, upstream)
      .map(({ device }) => device)
      .filter(({ id }) => !out.has(id));
  });
  return {
    sections: found.flat(),
    unlisted: [...new Set(devices)].filter(({ id }) => !named.has(id)),
    without: cases.filter((_, index) => found[index]!.length === 0),
  };
}

/** The sections of one case, in the order in which the study lists them. */
function findInCase(screening: Screening, operating: OperatingCase): NestedSection[] {
  const { study, model } = screening;
  const { upstream, solver } = operating;
  const out = new Set(solver.scenario?.out);
  const branchOfDevice = new Map(
    (study.feeder.devices ?? [])
      .filter(({ id }) => !out.has(id))
      .map(({ id, branch }) => [id, model.branchIndex.get(branch)!]),
  );
  const sections = (study.feeder.sections ?? []).flatMap((section) => {
    const branch = branchOfDevice.get(section.device);
    return branch === undefined ? [] : [{ section, branch }];
  });
  const standings = traceStandings(upstream, new Set(sections.map(({ branch }) => branch)));
  const within = orderGenerators(screening, operating);
  const placeOf = new Map(upstream.branches.map((branch, place) => [branch, place]));
  return sections.flatMap(({ section, branch }): NestedSection[] => {
    const standing = standings.get(branch) ?? 'aside';
    if (standing === 'aside') return [];
    if (standing === 'in-a-loop') return [{ section, operating, generators: undefined }];
    const place = placeOf.get(branch)!;
    return [{ section, operating, generators: within(place) }];
  });
}

/** Gives the generators that opening a branch of the way cuts off: those of an inner one are the first of an outer one's. */
function orderGenerators(
  screening: Screening,
  { upstream, solver }: OperatingCase,
): (place: number) => readonly Generator[] {
  const out = new Set(solver.scenario?.out);
  const { since } = traceCuts(upstream);
  const ordered = listGenerators(screening)
    .filter(({ id, node }) => since[node] !== -1 && !out.has(id))
    .sort((p, q) => since[p.node]! - since[q.node]!);
  const ends = new Int32Array(upstream.branches.length);
  for (let place = 0, end = 0; place < ends.length; place++) {
    while (end < ordered.length && since[ordered[end]!.node]! <= place) end++;
    ends[place] = end;
  }
  return (place) => ordered.slice(0, ends[place]);
}
