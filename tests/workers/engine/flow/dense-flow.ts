import type { Inverter, Load, Study } from '../../../../shared/schemas/study.ts';
import type { Complex } from '../../../../workers/engine/complex.ts';
import {
  add,
  divide,
  magnitude,
  multiply,
  polar,
  scale,
  subtract,
  zero,
} from '../../../../workers/engine/complex.ts';

/*
 * The same load flow by the plainest means: one full admittance matrix over all nodes and phases, in ohms and volts per
 * unit, windings of transformers one by one, and Newton's method with a Jacobian from small differences. It knows nothing
 * of trees, sweeps, sequences or cuts.
 */

type Matrix = Complex[][];

const conj = ({ re, im }: Complex): Complex => ({ re, im: -im });
const one: Complex = { re: 1, im: 0 };

/** Gives the voltage of each node and phase, "n1.A"; per unit of nominal phase voltage. */
export function solveDense(study: Study): Map<string, Complex> {
  const { nodes, sources = [] } = study.feeder;
  const names = nodes.flatMap(({ id, phases }) => [...phases].map((letter) => `${id}.${letter}`));
  const indexOf = new Map(names.map((name, index) => [name, index]));
  const y = admittances(study, indexOf);
  const fixed = new Map<number, Complex>();
  for (const { node, peakVoltagePu = 1 } of sources) {
    [...'ABC'].forEach((letter, p) =>
      fixed.set(indexOf.get(`${node}.${letter}`)!, polar(peakVoltagePu, -120 * p)),
    );
  }
  const free = names.map((_, index) => index).filter((index) => !fixed.has(index));
  // Voltages without load are a start from which Newton's method gets there.
  let v: Complex[] = names.map((_, index) => fixed.get(index) ?? zero);
  const start = solve(
    free.map((i) => free.map((k) => y[i]![k]!)),
    free.map((i) => [...fixed].reduce((sum, [k, e]) => subtract(sum, multiply(y[i]![k]!, e)), zero)),
  );
  free.forEach((i, at) => (v[i] = start[at]!));
  const draws = drawsOf(study, indexOf);
  const residual = (at: readonly Complex[]): Complex[] => {
    const drawn = draws(at);
    return free.map((i) => y[i]!.reduce((sum, yik, k) => add(sum, multiply(yik, at[k]!)), drawn[i]!));
  };
  for (let turn = 0; turn < 30; turn++) {
    const f = residual(v);
    const largest = Math.max(...f.map(magnitude));
    if (largest < 1e-11) break;
    v = newton(v, free, f, residual);
  }
  return new Map(names.map((name, index) => [name, v[index]!]));
}

function newton(
  v: readonly Complex[],
  free: readonly number[],
  f: readonly Complex[],
  residual: (at: readonly Complex[]) => Complex[],
): Complex[] {
  const step = 1e-7;
  const columns = free.flatMap((i) =>
    [
      { re: step, im: 0 },
      { re: 0, im: step },
    ].map((shift) => {
      const moved = [...v];
      moved[i] = add(v[i]!, shift);
      return residual(moved).map((value, at) => scale(subtract(value, f[at]!), 1 / step));
    }),
  );
  const rows: Matrix = f.flatMap((_, at) => [
    columns.map((column) => ({ re: column[at]!.re, im: 0 })),
    columns.map((column) => ({ re: column[at]!.im, im: 0 })),
  ]);
  const right = f.flatMap(({ re, im }) => [
    { re: -re, im: 0 },
    { re: -im, im: 0 },
  ]);
  const change = solve(rows, right);
  const next = [...v];
  free.forEach((i, at) => (next[i] = add(v[i]!, { re: change[2 * at]!.re, im: change[2 * at + 1]!.re })));
  return next;
}

function admittances(study: Study, indexOf: ReadonlyMap<string, number>): Matrix {
  const { nodes, lines = [], transformers = [], groundingBanks = [], machines = [] } = study.feeder;
  const kvOf = new Map(nodes.map(({ id, kv }) => [id, kv]));
  const y: Matrix = Array.from({ length: indexOf.size }, () =>
    Array.from({ length: indexOf.size }, () => zero),
  );
  const put = (a: string, b: string, value: Complex) => {
    const [i, k] = [indexOf.get(a)!, indexOf.get(b)!];
    y[i]![k] = add(y[i]![k]!, value);
  };
  /** Adds N·y·Nᵀ of one element that lies across a weighted sum of phase voltages. */
  const across = (ends: readonly (readonly [name: string, weight: number])[], value: Complex) => {
    for (const [a, p] of ends) for (const [b, q] of ends) put(a, b, scale(value, p * q));
  };
  for (const line of lines) {
    const ohms = kvOf.get(line.from)! ** 2 / study.baseMva;
    const z = (key: 'z1' | 'z0') => scale({ re: line[key]!.r, im: line[key]!.x }, line.km / ohms);
    const self = scale(add(z('z0'), scale(z('z1'), 2)), 1 / 3);
    const mutual = scale(subtract(z('z0'), z('z1')), 1 / 3);
    const letters = [...line.phases];
    const inverse = invert(letters.map((p) => letters.map((q) => (p === q ? self : mutual))));
    letters.forEach((p, i) =>
      letters.forEach((q, k) => {
        const value = inverse[i]![k]!;
        put(`${line.from}.${p}`, `${line.from}.${q}`, value);
        put(`${line.to}.${p}`, `${line.to}.${q}`, value);
        put(`${line.from}.${p}`, `${line.to}.${q}`, scale(value, -1));
        put(`${line.to}.${p}`, `${line.from}.${q}`, scale(value, -1));
      }),
    );
  }
  for (const { from, to, kva, connection, impedancePercent, xr } of transformers) {
    const size = ((impedancePercent / 100) * study.baseMva * 1000) / kva;
    const admittance = divide(one, polar(size, (Math.atan(xr) * 180) / Math.PI));
    const root = 1 / Math.sqrt(3);
    'ABC'.split('').forEach((p, k) => {
      // Each winding of one side against its own of the other; a delta's lies between this phase and a next one.
      const star = (node: string, sign: number) => [[`${node}.${p}`, sign] as const];
      const delta = (node: string, sign: number, towards: number) =>
        [
          [`${node}.${p}`, sign * root],
          [`${node}.${'ABC'[(k + towards) % 3]!}`, -sign * root],
        ] as const;
      const ends = {
        YNyn0: [...star(from, 1), ...star(to, -1)],
        Dd0: [...delta(from, 1, 1), ...delta(to, -1, 1)],
        // A clock of 1: the star's voltage goes with phase minus the one before it on the leading delta, or after on a lagging one.
        Dyn1: [...delta(from, 1, 2), ...star(to, -1)],
        Dyn11: [...delta(from, 1, 1), ...star(to, -1)],
        YNd1: [...star(from, 1), ...delta(to, -1, 1)],
        YNd11: [...star(from, 1), ...delta(to, -1, 2)],
      }[connection]!;
      across(ends, admittance);
      // Nothing ties a delta to earth; as little as this does not count.
      if (/d\d+$/.test(connection)) put(`${to}.${p}`, `${to}.${p}`, { re: 1e-7, im: 0 });
    });
  }
  for (const { node, z0 } of groundingBanks) {
    const ohms = kvOf.get(node)! ** 2 / study.baseMva;
    const ends = [...'ABC'].map((p) => [`${node}.${p}`, 1 / 3] as const);
    across(ends, scale(divide(one, scale({ re: z0.r, im: z0.x }, 1 / ohms)), 3));
  }
  if (machines.length > 0)
    throw new Error('got a machine, expected none: their other sequences are not here');
  return y;
}

/** What all loads, capacitors and inverters draw at given voltages, by node and phase. */
function drawsOf({ feeder, baseMva }: Study, indexOf: ReadonlyMap<string, number>) {
  const { loads = [], capacitors = [], inverters = [] } = feeder;
  const share = (baseMva * 1000) / 3;
  return (v: readonly Complex[]): Complex[] => {
    const drawn = v.map(() => zero);
    const between = (a: number, b: number | undefined, s: Complex, model: Load['model']) => {
      const volts = b === undefined ? v[a]! : subtract(v[a]!, v[b]!);
      const nominal = b === undefined ? 1 : Math.sqrt(3);
      const ratio = magnitude(volts) / nominal;
      const power = scale(s, model === 'impedance' ? ratio ** 2 : model === 'current' ? ratio : 1);
      const current = conj(divide(power, volts));
      drawn[a] = add(drawn[a]!, current);
      if (b !== undefined) drawn[b] = subtract(drawn[b]!, current);
    };
    for (const { node, phases, kw, kvar, connection, model } of loads) {
      const ends = [...phases].map((letter) => indexOf.get(`${node}.${letter}`)!);
      const s = { re: kw / share, im: kvar / share };
      if (connection === 'delta' && ends.length === 2) between(ends[0]!, ends[1], s, model);
      else if (connection === 'delta' && ends.length === 3)
        ends.forEach((end, k) => between(end, ends[(k + 1) % 3], scale(s, 1 / 3), model));
      else for (const end of ends) between(end, undefined, scale(s, 1 / ends.length), model);
    }
    for (const { node, phases, kvar } of capacitors) {
      const ends = [...phases].map((letter) => indexOf.get(`${node}.${letter}`)!);
      for (const end of ends)
        between(end, undefined, { re: 0, im: -kvar / share / ends.length }, 'impedance');
    }
    for (const inverter of inverters) send(inverter, v, drawn, between);
    return drawn;
  };

  /** One or two phases at constant power, three as a balanced current. */
  function send(
    { node, phases, kva, powerFactor = 1 }: Inverter,
    v: readonly Complex[],
    drawn: Complex[],
    between: (a: number, b: number | undefined, s: Complex, model: Load['model']) => void,
  ): void {
    const ends = [...phases].map((letter) => indexOf.get(`${node}.${letter}`)!);
    const kw = kva * Math.abs(powerFactor);
    const s = scale({ re: kw, im: Math.sign(powerFactor) * Math.sqrt(kva ** 2 - kw ** 2) }, -1 / share);
    if (ends.length === 1) between(ends[0]!, undefined, s, 'power');
    else if (ends.length === 2) between(ends[0]!, ends[1], s, 'power');
    else {
      const turn = (k: number) => polar(1, 120 * k);
      const v1 = scale(
        ends.reduce((sum, end, k) => add(sum, multiply(v[end]!, turn(k))), zero),
        1 / 3,
      );
      const current = conj(divide(scale(s, 1 / 3), v1));
      ends.forEach((end, k) => (drawn[end] = add(drawn[end]!, multiply(current, turn(-k)))));
    }
  }
}

function invert(matrix: Matrix): Matrix {
  const columns = matrix.map((_, k) =>
    solve(
      matrix,
      matrix.map((__, i) => (i === k ? one : zero)),
    ),
  );
  return matrix.map((_, i) => columns.map((column) => column[i]!));
}

/** Gauss elimination with pivoting. */
function solve(matrix: Matrix, right: readonly Complex[]): Complex[] {
  const n = matrix.length;
  const a = matrix.map((row) => [...row]);
  const b = [...right];
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (magnitude(a[i]![k]!) > magnitude(a[pivot]![k]!)) pivot = i;
    [a[k], a[pivot]] = [a[pivot]!, a[k]!];
    [b[k], b[pivot]] = [b[pivot]!, b[k]!];
    for (let i = k + 1; i < n; i++) {
      const factor = divide(a[i]![k]!, a[k]![k]!);
      if (factor.re === 0 && factor.im === 0) continue;
      for (let c = k; c < n; c++) a[i]![c] = subtract(a[i]![c]!, multiply(factor, a[k]![c]!));
      b[i] = subtract(b[i]!, multiply(factor, b[k]!));
    }
  }
  const x: Complex[] = Array.from({ length: n }, () => zero);
  for (let i = n - 1; i >= 0; i--) {
    let sum = b[i]!;
    for (let c = i + 1; c < n; c++) sum = subtract(sum, multiply(a[i]![c]!, x[c]!));
    x[i] = divide(sum, a[i]![i]!);
  }
  return x;
}
