import type { Line, Transformer } from '../../../shared/schemas/study.ts';
import type { Quantity } from '../../../shared/schemas/working.ts';
import type { Model } from '../case.ts';
import type { Complex } from '../complex.ts';
import { sum } from '../complex.ts';
import type { Screening } from '../findings/screening.ts';
import type { LineImpedances } from '../line-impedances.ts';
import { lineImpedances } from '../line-impedances.ts';
import { baseOhms } from '../per-unit.ts';
import { Working } from '../working.ts';
import {
  convertLines,
  convertMachine,
  convertOhms,
  convertSource,
  convertTransformer,
} from './element-steps.ts';
import type { Tie, Sequence } from './sequence-tree.ts';
import { seriesOf } from './sequence-tree.ts';

/* From what the study file says of an element to its impedance per unit: a step for each element, once for all networks. */

/** One sheet's bases and elements. */
export type Conversions = {
  readonly screening: Screening;
  /** The model that was solved: with method "iec60909" its impedances are corrected ones. */
  readonly model: Model;
  readonly elements: Working;
  /** By sequence and element: what it came to. */
  readonly known: Map<string, Quantity>;
  /** Keeps symbols apart. */
  readonly nextNumber: () => number;
  readonly baseMva: Quantity;
  readonly baseOhmsAt: (kv: number) => Quantity;
  readonly impedancesOf: (line: Line) => LineImpedances;
  readonly lines: ReadonlyMap<string, Line>;
  readonly transformers: ReadonlyMap<string, Transformer>;
};

/** Where an element stands in which network; the number is its own. */
export type ConversionPlace = { working: Working; sequence: Sequence; number: number; node: number };

export function makeConversions(screening: Screening, model: Model): Conversions {
  const { study, project } = screening;
  let number = 0;
  const byId = <T extends { id: string }>(feeder: readonly T[] = [], own: readonly T[] = []) =>
    new Map([...feeder, ...own].map((element) => [element.id, element]));
  return {
    screening,
    model,
    elements: new Working(),
    known: new Map(),
    nextNumber: () => ++number,
    baseMva: { symbol: 'Sb', words: 'base power', value: study.baseMva, unit: 'MVA' },
    baseOhmsAt: (kv) => ({
      symbol: baseSymbol('Zb', kv),
      words: `base impedance at ${kv} kV`,
      value: baseOhms(model.baseMva, kv),
      unit: 'ohm',
    }),
    impedancesOf: lineImpedances(study),
    lines: byId(study.feeder.lines, project.lines),
    transformers: byId(study.feeder.transformers, project.transformers),
  };
}

/** "Zb_12_47" at 12.47 kV. */
export function baseSymbol(name: string, kv: number): string {
  return `${name}_${String(kv).replace(/\W/g, '_')}`;
}

/** Converts once; what a later network has too it takes from here. Lines and windings have no negative sequence of their own. */
function once(
  { known, elements, nextNumber }: Conversions,
  id: string,
  sequence: Sequence,
  node: number,
  convert: (place: ConversionPlace) => Quantity,
): Quantity {
  const key = `${sequence} ${id}`;
  let quantity = known.get(key);
  if (!quantity) {
    quantity = convert({ working: elements, sequence, number: nextNumber(), node });
    known.set(key, quantity);
  }
  return quantity;
}

const ofBranch = (sequence: Sequence) => (sequence === 'z0' ? 'z0' : 'z1');

/** What lines must have in common to be converted together; nothing for a transformer or a corrected impedance. */
export function findKindOfLine(
  conversions: Conversions,
  branch: number,
  sequence: Sequence,
): string | undefined {
  const { model, screening, lines, impedancesOf } = conversions;
  const { id, from } = model.branches[branch]!;
  const line = lines.get(id);
  if (!line || model !== screening.model) return undefined;
  const { r, x } = sequence === 'z0' ? impedancesOf(line).z0 : impedancesOf(line).z1;
  return `${r} ${x} ${model.nodes[from]!.kv}`;
}

/** The most lines in one step. */
const mostLines = 12;

/** Gives the impedance of a branch, or of lines of one kind in a row, in as many parts as it takes. */
export function convertBranches(
  conversions: Conversions,
  branches: readonly number[],
  sequence: Sequence,
): Quantity[] {
  const quantities: Quantity[] = [];
  for (let start = 0; start < branches.length; start += mostLines) {
    quantities.push(convertPart(conversions, branches.slice(start, start + mostLines), ofBranch(sequence)));
  }
  return quantities;
}

function convertPart(conversions: Conversions, branches: readonly number[], sequence: Sequence): Quantity {
  const { screening, model, lines, transformers, impedancesOf } = conversions;
  const { from, to } = model.branches[branches[0]!]!;
  const ids = branches.map((branch) => model.branches[branch]!.id);
  const z = sum(...branches.map((branch) => seriesOf(model, branch, sequence)));
  return once(conversions, ids.join(' '), sequence, from, (place) => {
    if (model !== screening.model) return giveCorrected(ids[0]!, z, place);
    const own = ids.flatMap((id) => lines.get(id) ?? []);
    if (own.length === 0) return convertTransformer(conversions, transformers.get(ids[0]!)!, to, z, place);
    const perKm = impedancesOf(own[0]!);
    return convertLines(conversions, own, sequence === 'z0' ? perKm.z0 : perKm.z1, z, place);
  });
}

function giveCorrected(id: string, z: Complex, { working, sequence, number }: ConversionPlace): Quantity {
  return working.given(`${sequence}_${number}`, `${id}, corrected as IEC 60909-0 asks`, z, 'pu');
}

/** Gives the impedance of a tie to earth. */
export function convertTie(conversions: Conversions, tie: Tie, sequence: Sequence, node: number): Quantity {
  const { screening, model, transformers } = conversions;
  const { study, project } = screening;
  const both = <T extends { id: string }>(feeder: T[] = [], own: T[] = []): T =>
    [...feeder, ...own].find(({ id }) => id === tie.id)!;
  return once(conversions, tie.id, sequence, node, (place) => {
    if (model !== screening.model) return giveCorrected(tie.id, tie.z, place);
    switch (tie.kind) {
      case 'source':
        return convertSource(conversions, both(study.feeder.sources, project.sources), tie.z, place);
      case 'machine':
        return convertMachine(conversions, both(study.feeder.machines, project.machines), tie.z, place);
      case 'bank': {
        const bank = both(study.feeder.groundingBanks, project.groundingBanks);
        return convertOhms(conversions, `ground bank ${tie.id}`, bank.z0, tie.z, place);
      }
      case 'transformer': {
        const { to } = model.branches[model.branchIndex.get(tie.id)!]!;
        return convertTransformer(conversions, transformers.get(tie.id)!, to, tie.z, place);
      }
    }
  });
}
