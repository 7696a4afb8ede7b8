import type { ElementLists, Node, Study } from '../../shared/schemas/study.ts';

type Lists = ElementLists & { nodes?: Node[] };

/** The kinds of elements that both the feeder and a project have. */
export type ElementKind = keyof Lists;

export type Placed<K extends ElementKind> = {
  element: NonNullable<Lists[K]>[number];
  /** JSON pointer of the element in the study file. */
  pointer: string;
  ofProject: boolean;
};

/** All elements of a kind, in the same order. */
export function listElements<K extends ElementKind>(study: Study, kind: K): readonly Placed<K>['element'][] {
  const of = (lists: Lists | undefined): readonly Placed<K>['element'][] => lists?.[kind] ?? [];
  return of(study.feeder).concat(of(study.project));
}

/** Goes through all elements of a kind, the feeder's before the project's. */
export function* eachElement<K extends ElementKind>(study: Study, kind: K): Generator<Placed<K>> {
  for (const part of ['feeder', 'project'] as const) {
    const lists: Lists | undefined = study[part];
    let index = 0;
    for (const element of lists?.[kind] ?? []) {
      yield { element, pointer: `/${part}/${kind}/${index++}`, ofProject: part === 'project' };
    }
  }
}
