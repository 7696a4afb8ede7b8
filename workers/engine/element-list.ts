import type { ElementLists, Node, Study } from '../../shared/schemas/study.ts';
import type { ElementKind } from './study-elements.ts';

type Lists = ElementLists & { nodes?: Node[] };

export type ElementOf<K extends ElementKind> = NonNullable<Lists[K]>[number];

/** All elements of a kind by number, the feeder's before the project's; pointers are spelt out when asked for. */
export class ElementList<K extends ElementKind> {
  readonly elements: readonly ElementOf<K>[];
  private readonly feederCount: number;
  private readonly kind: K;

  constructor(study: Study, kind: K) {
    const own = (lists: Lists | undefined): readonly ElementOf<K>[] => lists?.[kind] ?? [];
    const [feeder, project] = [own(study.feeder), own(study.project)];
    this.kind = kind;
    this.feederCount = feeder.length;
    this.elements = project.length === 0 ? feeder : [...feeder, ...project];
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
