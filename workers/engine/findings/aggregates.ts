import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { Quantity } from '../../../shared/schemas/working.ts';
import type { Working } from '../working.ts';
import type { Generator } from './island-generation.ts';
import { ruleOf } from './judge.ts';
import type { Screening } from './screening.ts';

/* All generation in some part of the network: what is connected or ahead in the queue, and the project's. A kVA of nameplate counts as a kW. */

export type Aggregate = {
  readonly connected: readonly Generator[];
  readonly proposed: readonly Generator[];
  readonly connectedKw: number;
  readonly proposedKw: number;
  readonly totalKw: number;
  readonly sizeOf: (generator: Generator) => number;
};

/** Adds up generators on the size basis of the question's rule. */
export function sumAggregate(
  screening: Screening,
  id: QuestionId,
  generators: readonly Generator[],
): Aggregate {
  const { sizeBasis } = ruleOf(screening, id);
  const sizeOf = ({ unit, kva }: Generator) => {
    const { exportKw } = unit.kind === 'machine' ? unit.machine : unit.inverter;
    return sizeBasis === 'export' ? (exportKw ?? kva) : kva;
  };
  const connected: Generator[] = [];
  const proposed: Generator[] = [];
  let connectedKw = 0;
  let proposedKw = 0;
  for (const generator of generators) {
    (generator.ofProject ? proposed : connected).push(generator);
    if (generator.ofProject) proposedKw += sizeOf(generator);
    else connectedKw += sizeOf(generator);
  }
  return { connected, proposed, connectedKw, proposedKw, totalKw: connectedKw + proposedKw, sizeOf };
}

/** Writes down the two parts and their sum, which it gives. */
export function explainAggregate(working: Working, aggregate: Aggregate, where: string): Quantity {
  const { connected, proposed, connectedKw, proposedKw, totalKw } = aggregate;
  const words = (what: string, generators: readonly Generator[]) =>
    `${what}${where}: ${listMembers(aggregate, generators)}`;
  return working.compute(
    { symbol: 'P', words: `All generation${where}`, unit: 'kW' },
    'P_connected + P_project',
    [
      working.given('P_connected', words('Connected or ahead in the queue', connected), connectedKw, 'kW'),
      working.given('P_project', words('Of the project', proposed), proposedKw, 'kW'),
    ],
    totalKw,
  );
}

/** More names than that say nothing more to a reader. */
const mostNamed = 6;

function listMembers({ sizeOf }: Aggregate, generators: readonly Generator[]): string {
  if (generators.length === 0) return 'none';
  const names = generators.slice(0, mostNamed).map((each) => `${each.id} ${kilowatts(sizeOf(each))}`);
  const more = generators.length - names.length;
  return `${names.join(', ')}${more > 0 ? ` and ${more} more` : ''}`;
}

export function describeAggregate({ connectedKw, proposedKw }: Aggregate): string {
  return `${kilowatts(connectedKw)} connected or ahead and ${kilowatts(proposedKw)} of the project`;
}

/** To a hundredth, so that a total just over a limit does not read as if it were on it. */
export function kilowatts(size: number): string {
  return `${Number(size.toFixed(2))} kW`;
}
