import { findCircuit } from './circuits.ts';
import type { Answered } from './judge.ts';
import { answer } from './judge.ts';
import type { Screening } from './screening.ts';

/** Is the point of interconnection on a system subject to these rules? (SGIP 2.2.1.1.) What the model says of its circuit. */
export function answerJurisdiction(screening: Screening): Answered[] {
  const circuit = findCircuit(screening, screening.upstream);
  const reply = (verdict: Answered['verdict'], note: string) => [
    answer(screening, 'jurisdiction', verdict, { element: circuit?.id ?? screening.project.node, note }),
  ];
  if (!circuit) return reply('needs-data', 'The circuit of the point of interconnection is not known.');
  if (circuit.subjectToRules === undefined) {
    return reply('needs-data', `Whether these rules apply to circuit ${circuit.id} is not known.`);
  }
  return circuit.subjectToRules
    ? reply('within', `The model has circuit ${circuit.id} as subject to these rules.`)
    : reply('outside', `The model has circuit ${circuit.id} as not subject to these rules.`);
}
