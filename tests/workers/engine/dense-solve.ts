import type { Study } from '../../../shared/schemas/study.ts';
import type { Complex } from '../../../workers/engine/complex.ts';
import { add, divide, multiply, scale, subtract, zero } from '../../../workers/engine/complex.ts';

/*
 * The same networks by the plainest means: a full bus admittance matrix per sequence, inverted by Gauss–Jordan with
 * pivoting. It knows only lines, sources and solidly grounded or ungrounded machines, which is what the properties draw.
 */

const one: Complex = { re: 1, im: 0 };

export function denseImpedance(study: Study, sequence: 'z1' | 'z0', withMachines: boolean): Complex[][] {
  const { nodes, lines = [], sources = [], machines = [] } = study.feeder;
  const indexOf = new Map(nodes.map(({ id }, index) => [id, index]));
  const y: Complex[][] = nodes.map(() => nodes.map(() => zero));
  const addTo = (i: number, j: number, value: Complex) => (y[i]![j] = add(y[i]![j]!, value));
  for (const line of lines) {
    const [i, j] = [indexOf.get(line.from)!, indexOf.get(line.to)!];
    const z = { re: line[sequence]!.r * line.km, im: line[sequence]!.x * line.km };
    const admittance = divide(one, z);
    addTo(i, i, admittance);
    addTo(j, j, admittance);
    addTo(i, j, scale(admittance, -1));
    addTo(j, i, scale(admittance, -1));
  }
  for (const { node, max } of sources) {
    const z = max[sequence];
    if (z) addTo(indexOf.get(node)!, indexOf.get(node)!, divide(one, { re: z.r, im: z.x }));
  }
  for (const { node, kva, xSubtransientPu, x0Pu, neutral } of withMachines ? machines : []) {
    const x = sequence === 'z1' ? xSubtransientPu : x0Pu!;
    if (sequence === 'z0' && neutral === 'ungrounded') continue;
    const ohms = (x * nodes[indexOf.get(node)!]!.kv ** 2) / (kva / 1000);
    addTo(indexOf.get(node)!, indexOf.get(node)!, divide(one, { re: 0, im: ohms }));
  }
  return invert(y);
}

function invert(matrix: Complex[][]): Complex[][] {
  const n = matrix.length;
  const left = matrix.map((row) => [...row]);
  const right = matrix.map((_, i) => matrix.map((__, j) => (i === j ? one : zero)));
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (size(left[i]![k]!) > size(left[pivot]![k]!)) pivot = i;
    for (const side of [left, right]) [side[k], side[pivot]] = [side[pivot]!, side[k]!];
    const inverse = divide(one, left[k]![k]!);
    for (const side of [left, right]) side[k] = side[k]!.map((value) => multiply(value, inverse));
    for (let i = 0; i < n; i++) {
      const factor = left[i]![k]!;
      if (i === k || size(factor) === 0) continue;
      for (const side of [left, right]) {
        side[i] = side[i]!.map((value, j) => subtract(value, multiply(factor, side[k]![j]!)));
      }
    }
  }
  return right;
}

function size({ re, im }: Complex): number {
  return Math.hypot(re, im);
}
