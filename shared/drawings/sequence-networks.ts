import { formatValue } from '../quantity-words.ts';
import type { FaultKind } from '../schemas/study-result.ts';
import type { QuantityValue } from '../schemas/working.ts';
import type { Drawing, Mark } from './drawing.ts';
import { circle, line, path, rect, text } from './drawing.ts';

/* The three sequence networks as seen from the fault, and how the fault joins them. */

export type ReducedNetworks = Record<'positive' | 'negative' | 'zero', QuantityValue | null>;

const faultWords: Record<FaultKind, { title: string; how: string }> = {
  threePhase: { title: 'Three-phase fault', how: 'The positive-sequence network alone, short-circuited.' },
  lineGround: { title: 'Line-to-ground fault', how: 'All three networks in series.' },
  lineLine: { title: 'Line-to-line fault', how: 'Positive and negative networks in parallel.' },
  lineLineGround: { title: 'Two-lines-to-ground fault', how: 'All three networks in parallel.' },
};

const columns = { positive: 110, negative: 310, zero: 510 };
const top = 60;
const bottom = 200;
/** Clear of the impedance of the last network. */
const right = 624;
type Name = keyof typeof columns;
const digits = { positive: '1', negative: '2', zero: '0' };

/** What the way from the tap of a lateral adds where the networks are joined. */
const onLateral: Partial<Record<FaultKind, { symbol: string; x: number; y: number; words: string }>> = {
  lineGround: {
    symbol: '3·Zs',
    x: 310,
    y: 24,
    words: ' Three times the self impedance of the lateral, Zs, is in the loop.',
  },
  lineLine: {
    symbol: '2·(Zs - Zm)',
    x: 210,
    y: top,
    words: ' The loop of the lateral, 2·(Zs - Zm), is between them.',
  },
};

/** With `isLateral` the networks are those of the tap; nothing is drawn of a fault that joins them in no simple way then. */
export function drawSequenceNetworks(
  kind: FaultKind,
  networks: ReducedNetworks,
  isLateral: boolean,
): Drawing | undefined {
  const lateral = isLateral ? onLateral[kind] : undefined;
  if (isLateral && !lateral) return undefined;
  const { title, how } = faultWords[kind];
  const used = usedIn(kind);
  const marks = used.flatMap((name) => drawNetwork(name, networks[name]));
  marks.push(...wire(kind));
  if (lateral) {
    marks.push(rect(lateral.x - 20, lateral.y - 8, 40, 16, 'copper-body'));
    marks.push(text(lateral.x, lateral.y + 24, lateral.symbol, 'copper-text', 'middle'));
  }
  return {
    title: `${title}: how it joins the sequence networks`,
    description: `${how}${lateral?.words ?? ''} ${used.map((name) => `Z${digits[name]} is ${print(networks[name])}`).join('; ')}.`,
    width: 640,
    height: 250,
    marks,
    table: {
      columns: [
        { label: 'Network', isFigure: false },
        { label: 'Impedance at the fault, pu', isFigure: true },
        { label: 'Driven by', isFigure: false },
      ],
      rows: used.map((name) => [
        name,
        networks[name] === null ? 'open' : formatValue(networks[name], ''),
        name === 'positive' ? 'the voltage before the fault' : 'nothing of its own',
      ]),
    },
  };
}

function usedIn(kind: FaultKind): Name[] {
  if (kind === 'threePhase') return ['positive'];
  return kind === 'lineLine' ? ['positive', 'negative'] : ['positive', 'negative', 'zero'];
}

function print(z: QuantityValue | null): string {
  return z === null ? 'open' : formatValue(z, 'pu');
}

/** Resistance and reactance below each other, so that neighbours have room. */
function splitValue(z: QuantityValue | null): string[] {
  return z === null ? ['open'] : formatValue(z, '').split(/ (?=[+\u2212] j)/);
}

/** From its reference at the bottom to the fault at the top. */
function drawNetwork(name: Name, z: QuantityValue | null): Mark[] {
  const x = columns[name];
  const marks: Mark[] = [
    text(x + 18, 110, `Z${digits[name]}`),
    ...splitValue(z).map((part, index) => text(x + 18, 126 + index * 15, part, 'figure')),
    text(x + 10, top + 14, `I${digits[name]}`, 'soft'),
    text(x, bottom + 40, name, 'soft', 'middle'),
    circle(x, top, 3, 'dot'),
    circle(x, bottom, 3, 'dot'),
    line(x, top, x, 92),
  ];
  if (z === null) marks.push(line(x, 92, x + 12, 112), line(x, 132, x, 150));
  else marks.push(rect(x - 9, 92, 18, 40));
  marks.push(line(x, 132, x, name === 'positive' ? 150 : bottom));
  if (name === 'positive') {
    const wave = Array.from({ length: 9 }, (_, index) => {
      return [x - 7 + index * 1.75, 163 - 4 * Math.sin((index / 4) * Math.PI)] as const;
    });
    marks.push(circle(x, 163, 13), path(wave), line(x, 176, x, bottom), text(x + 18, 167, 'V'));
  }
  return marks;
}

function wire(kind: FaultKind): Mark[] {
  const { positive, negative, zero } = columns;
  const rail = (y: number, end: number) => line(positive, y, end, y, 'copper');
  if (kind === 'threePhase') {
    const side = positive - 70;
    const around = [
      [positive, top],
      [side, top],
      [side, bottom],
      [positive, bottom],
    ] as const;
    return [path(around, 'copper')];
  }
  if (kind === 'lineLine') return [rail(top, negative), rail(bottom, negative)];
  if (kind === 'lineLineGround') return [rail(top, zero), rail(bottom, zero)];
  const step = (from: number, to: number) => {
    const between = (from + to) / 2 + 26;
    const points = [
      [from, bottom],
      [between, bottom],
      [between, top],
      [to, top],
    ] as const;
    return path(points, 'copper');
  };
  const back = [
    [zero, bottom],
    [right, bottom],
    [right, 24],
    [positive, 24],
    [positive, top],
  ] as const;
  return [step(positive, negative), step(negative, zero), path(back, 'copper')];
}
