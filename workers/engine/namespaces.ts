import type { ElementList } from './element-list.ts';
import type { IdIndex } from './id-index.ts';
import type { Problems } from './problems.ts';
import { describeValue } from './problems.ts';
import type { ElementKind } from './study-elements.ts';

/** A set of ids, with what its elements are called; `from` and `before` bound the numbers of those that are meant. */
export type Namespace = { ids: IdIndex; what: string; from?: number; before?: number };

/** Follows one field of all elements of a list; an optional field may be missing. */
export function resolve(
  list: ElementList<ElementKind>,
  field: string,
  target: Namespace,
  problems: Problems,
  numbers?: Int32Array,
): void {
  const { elements } = list;
  let guess = 0;
  for (let index = 0; index < elements.length; index++) {
    const id = (elements[index] as unknown as Record<string, string | undefined>)[field];
    if (id === undefined) continue;
    const number = target.ids.find(id, guess);
    guess = number + 1;
    if (numbers) numbers[index] = number;
    if (!isWithinReach(target, number, list.isOfProject(index))) {
      noteMissing(target, id, number, () => list.pointer(index, field), problems);
    }
  }
}

/** Follows one reference of the feeder's; -1 where it leads nowhere. */
export function refer(
  id: string,
  target: Namespace,
  pointer: string | (() => string),
  problems: Problems,
): number {
  const number = target.ids.find(id, 0);
  const { from = 0, before = Infinity } = target;
  if (isWithinReach(target, number, false) && number >= from && number < before) return number;
  noteMissing(target, id, number, () => (typeof pointer === 'string' ? pointer : pointer()), problems);
  return -1;
}

/** What belongs to the feeder is there without the project, so it cannot lean on the project's own elements. */
function isWithinReach({ ids }: Namespace, number: number, ofProject: boolean): boolean {
  return number !== -1 && (ofProject || !ids.isOfProject(number));
}

function noteMissing(
  { what, ids }: Namespace,
  id: string,
  number: number,
  pointer: () => string,
  problems: Problems,
): void {
  const whose = number !== -1 && ids.isOfProject(number) ? 'of the feeder' : 'of this file';
  problems.add(() => ({
    pointer: pointer(),
    got: describeValue(id),
    expected: `the id of a ${what} ${whose}`,
  }));
}
