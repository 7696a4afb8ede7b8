import type { ElementList } from './element-list.ts';
import type { Problems } from './problems.ts';
import { describeValue } from './problems.ts';
import type { ElementKind } from './study-elements.ts';

/** The numbers of a list's elements by their ids, where several lists share one set of ids one after the other. */
export class IdIndex {
  private readonly numbers = new Map<string, number>();
  private readonly lists: readonly ElementList<ElementKind>[];

  /** Notes ids that occur twice. */
  constructor(lists: readonly ElementList<ElementKind>[], problems: Problems) {
    this.lists = lists;
    const { numbers } = this;
    let before = 0;
    for (const list of lists) {
      const { elements } = list;
      for (let index = 0; index < elements.length; index++) {
        const { id } = elements[index]!;
        // One look-up in place of two for nearly all: the map grows unless it had the id.
        numbers.set(id, before + index);
        if (numbers.size === before + index + 1) continue;
        this.indexWithTwins(problems);
        return;
      }
      before += elements.length;
    }
  }

  /**
   * Number of the element with this id, -1 where there is none. Files mostly name elements in the order in which they list
   * them, so a guess of the number saves most look-ups: each costs several trips to memory.
   */
  find(id: string, guess: number): number {
    if (this.lists[0]!.elements[guess]?.id === id) return guess;
    return this.numbers.get(id) ?? -1;
  }

  /** Number of the element with this id, nothing where there is none. */
  get(id: string): number | undefined {
    return this.numbers.get(id);
  }

  isOfProject(number: number): boolean {
    let index = number;
    for (const list of this.lists) {
      if (index < list.elements.length) return list.isOfProject(index);
      index -= list.elements.length;
    }
    return false;
  }

  /** From the start, with the first of each id in the map. */
  private indexWithTwins(problems: Problems): void {
    const { numbers } = this;
    numbers.clear();
    let number = 0;
    for (const list of this.lists) {
      list.elements.forEach(({ id }, index) => {
        const first = numbers.get(id);
        if (first === undefined) numbers.set(id, number);
        else {
          problems.add(() => ({
            pointer: list.pointer(index, 'id'),
            got: describeValue(id),
            expected: `an id of its own (${this.pointer(first)} has this one)`,
          }));
        }
        number++;
      });
    }
  }

  private pointer(number: number): string {
    let before = 0;
    for (const list of this.lists) {
      if (number < before + list.elements.length) return list.pointer(number - before);
      before += list.elements.length;
    }
    throw new Error(`got element ${number}, expected one of ${before}`);
  }
}
