import type { Branch, Model, ModelNode } from './case.ts';
import type { Wiring } from './wiring.ts';

/*
 * Single nodes and branches of a model. Where a model is made from a study its lists of them are made when they are first
 * asked for: a hundred thousand objects take longer to make and to keep than most cases to solve.
 */

type ModelParts = {
  nodeAt(index: number): ModelNode;
  branchAt(index: number): Branch;
};

const known = new WeakMap<Model, ModelParts>();

export function nodeAt(model: Model, index: number): ModelNode {
  return known.get(model)?.nodeAt(index) ?? model.nodes[index]!;
}

export function branchAt(model: Model, index: number): Branch {
  return known.get(model)?.branchAt(index) ?? model.branches[index]!;
}

/** Tells of a new model how to make its parts one by one. */
export function makePartsBy(model: Model, parts: ModelParts): void {
  known.set(model, parts);
}

/**
 * Gives a model that differs from another in its impedances alone. What the other makes only when it is asked stays unmade,
 * which copying it field by field would not leave so.
 */
export function modelAlike(
  model: Model,
  differences: { wiring: Wiring } & Partial<Pick<Model, 'sources' | 'machines' | 'groundingBanks'>>,
): Model {
  const alike = Object.assign(Object.create(model) as Model, differences);
  const parts = known.get(model);
  if (parts) known.set(alike, parts);
  return alike;
}
