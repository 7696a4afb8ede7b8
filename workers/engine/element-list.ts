import type { ElementLists, Node, Study } from '../../shared/schemas/study.ts';
import type { ElementKind } from './study-elements.ts';

type Lists = ElementLists & { nodes?: Node[] };

export type ElementOf<K extends ElementKind> = NonNullable<Lists[K]>[number];

/** All elements of a kind by number, the feeder's before the project's; pointers are spelt out when asked for. */
export class ElementList<K extends ElementKind> {
  readonly elements: readonly ElementOf<K>[];
  private readonly feederCount: number;
  private readonly kind: K;
  private readonly lists: readonly (readonly ElementOf<K>[] | undefined)[];
  /** As it was: `elements` can be a list of the study's itself. */
  private readonly count: number;

  constructor(study: Study, kind: K) {
    this.kind = kind;
    this.lists = listsOf(study, kind);
    const [feeder = [], project = []] = this.lists;
    this.feederCount = feeder.length;
    this.elements = project.length === 0 ? feeder : feeder.concat(project);
    this.count = this.elements.length;
  }

  /** Whether this is still the list of a study, and not one that has grown or been put in another's place. */
  isOf(study: Study): boolean {
    const now = listsOf(study, this.kind);
    const count = now.reduce((total, list) => total + (list?.length ?? 0), 0);
    return count === this.count && now.every((list, part) => list === this.lists[part]);
  }

  isOfProject(index: number): boolean {
    return index >= this.feederCount;
  }

  /** JSON pointer of an element in the study file, or of one of its fields. */
  pointer(index: number, field?: string): string {
    const place = this.isOfProject(index)
      ? `/project/${this.kind}/${index - this.feederCount}`
      : `/feeder/${this.kind}/${index}`;
    return field === undefined ? place : `${place}/${field}`;
  }
}

/** The feeder's and the project's. */
function listsOf<K extends ElementKind>(study: Study, kind: K): (readonly ElementOf<K>[] | undefined)[] {
  return [study.feeder, study.project].map((part: Lists | undefined) => part?.[kind]);
}
