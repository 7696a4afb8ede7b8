import { formatNumber } from '../format.ts';
import { formatValue } from '../quantity-words.ts';
import type { SheetPlace, SheetShunt } from '../schemas/sheets.ts';
import type { QuantityValue } from '../schemas/working.ts';
import type { Drawing, Mark } from './drawing.ts';
import { circle, line, path, rect, text } from './drawing.ts';

/* The way from the source to the point of interconnection, from top to bottom, with what feeds and earths along it. */

/** Lines in a row that nothing stands on are drawn as one. */
type Stretch = {
  places: SheetPlace[];
  km: number;
  z1: QuantityValue | null;
  z0: QuantityValue | null;
};

const isBare = ({ by, devices, shunts, ofProject, branchesOff }: SheetPlace) =>
  by?.kind === 'line' && devices.length + shunts.length + ofProject.length === 0 && !branchesOff;

/** Puts a line to the lines before it for as long as nothing stands between. */
export function condensePath(places: readonly SheetPlace[]): Stretch[] {
  const stretches: Stretch[] = [];
  places.forEach((place, index) => {
    const before = places[index - 1];
    const last = stretches.at(-1);
    const goesOn = before && isBare(before) && place.by?.kind === 'line' && place.devices.length === 0;
    if (last && goesOn) {
      last.places.push(place);
      last.km += place.by!.km;
      last.z1 = addValues(last.z1, place.by!.z1);
      last.z0 = addValues(last.z0, place.by!.z0);
      return;
    }
    const { km = 0, z1 = null, z0 = null } = place.by ?? {};
    stretches.push({ places: [place], km, z1, z0 });
  });
  return stretches;
}

function addValues(p: QuantityValue | null, q: QuantityValue | null): QuantityValue | null {
  if (p === null || q === null || typeof p === 'number' || typeof q === 'number') return null;
  return { re: p.re + q.re, im: p.im + q.im };
}

const spine = 90;
const rowHeight = 78;

export function drawOneLine(places: readonly SheetPlace[]): Drawing {
  const stretches = condensePath(places);
  const marks: Mark[] = [];
  stretches.forEach((stretch, index) => {
    const y = 34 + index * rowHeight;
    if (index > 0) marks.push(...drawBranch(stretch, y - rowHeight, y));
    marks.push(...drawPlace(stretch.places.at(-1)!, y));
  });
  return {
    title: 'The way from the source to the point of interconnection',
    description: `${places.length} places; the source is at the top, the point of interconnection at the bottom.`,
    width: 640,
    height: 34 + (stretches.length - 1) * rowHeight + 58,
    marks,
    table: tabulate(stretches),
  };
}

function drawPlace({ node, kv, km, shunts, ofProject, branchesOff }: SheetPlace, y: number): Mark[] {
  const marks = [line(spine - 24, y, spine + 24, y, 'heavy')];
  const names = [...shunts].map(describeShunt);
  marks.push(text(spine + 40, y + 4, `${node}, ${kv} kV, ${formatNumber(km, 2)} km`));
  if (shunts.length > 0) {
    marks.push(line(spine - 24, y, spine - 38, y));
    marks.push(...drawShunt(shunts[0]!, spine - 50, y, false));
  }
  const others = [...(branchesOff ? ['generation or ground sources branch off here'] : []), ...names];
  if (others.length > 0) marks.push(text(spine + 40, y + 18, shorten(others), 'soft'));
  if (ofProject.length > 0) {
    // Below the line of what else is here.
    const at = others.length > 0 ? y + 36 : y + 24;
    marks.push(line(spine, y, spine, at - 10, 'copper'), ...drawShunt(ofProject[0]!, spine, at, true));
    marks.push(
      text(spine + 40, at + 4, `the project: ${shorten(ofProject.map(describeShunt))}`, 'copper-text'),
    );
  }
  return marks;
}

/** A circle for what turns or feeds, three bars for what earths, a wave or a half-bridge inside. */
function drawShunt({ kind }: SheetShunt, x: number, y: number, isProject: boolean): Mark[] {
  const look = isProject ? 'copper' : 'ink';
  if (kind === 'bank' || kind === 'transformer') {
    return [8, 5, 2].map((half, index) => line(x - half, y + index * 3, x + half, y + index * 3, look));
  }
  const wave = Array.from({ length: 9 }, (_, index) => {
    return [x - 6 + index * 1.5, y - 3.5 * Math.sin((index / 4) * Math.PI)] as const;
  });
  const inside = kind === 'inverter' ? [line(x - 6, y + 5, x + 6, y - 5, look)] : [path(wave, look)];
  return [circle(x, y, 10, isProject ? 'copper-body' : 'body'), ...inside];
}

function drawBranch({ places, km, z1, z0 }: Stretch, from: number, to: number): Mark[] {
  const { by, devices } = places[0]!;
  const middle = (from + to) / 2;
  const marks: Mark[] = [];
  if (by!.kind === 'transformer') {
    marks.push(line(spine, from, spine, middle - 17), line(spine, middle + 17, spine, to));
    marks.push(circle(spine, middle - 6, 11), circle(spine, middle + 6, 11, 'ink'));
  } else if (by!.kind === 'switch') {
    marks.push(line(spine, from, spine, to, 'dashed'));
  } else marks.push(line(spine, from, spine, to));
  if (devices.length > 0) marks.push(rect(spine - 6, from + 8, 12, 12));
  const name = places.length === 1 ? by!.id : `${places.length} lines, ${by!.id} to ${places.at(-1)!.by!.id}`;
  const length = by!.kind === 'line' ? `, ${formatNumber(km, 3)} km` : '';
  const guard = devices.length > 0 ? `  [${devices.join(', ')}]` : '';
  const kind = by!.connection ? `, ${by!.connection}` : '';
  marks.push(
    text(spine + 40, middle + (by!.kind === 'switch' ? 2 : -4), `${name}${kind}${length}${guard}`, 'soft'),
  );
  if (z1 !== null) {
    const zero = z0 === null ? 'open' : formatValue(z0, 'pu');
    marks.push(text(spine + 40, middle + 9, `z1 ${formatValue(z1, 'pu')}   z0 ${zero}`, 'figure'));
  }
  return marks;
}

function describeShunt({ kind, id }: SheetShunt): string {
  return `${kind === 'bank' ? 'ground bank' : kind} ${id}`;
}

function shorten(names: readonly string[]): string {
  return names.length > 3 ? `${names.slice(0, 3).join(', ')} and ${names.length - 3} more` : names.join(', ');
}

const zeroWords = {
  series: 'goes through',
  'earthed-before': 'earthed on the source side',
  'earthed-after': 'earthed on this side',
  open: 'open',
} as const;

function tabulate(stretches: readonly Stretch[]): Drawing['table'] {
  const figure = (label: string) => ({ label, isFigure: true });
  const word = (label: string) => ({ label, isFigure: false });
  return {
    columns: [
      word('To'),
      word('By'),
      word('Devices'),
      figure('km from the source'),
      figure('z1, pu'),
      figure('z0, pu'),
      word('Zero sequence'),
      word('Feeds or earths here'),
    ],
    rows: stretches.map(({ places, z1, z0 }) => {
      const last = places.at(-1)!;
      const { by, devices } = places[0]!;
      return [
        `${last.node}, ${last.kv} kV`,
        by === undefined ? 'source' : places.length === 1 ? `${by.kind} ${by.id}` : `${places.length} lines`,
        devices.join(', ') || 'none',
        formatNumber(last.km, 3),
        z1 === null ? 'none' : formatValue(z1, ''),
        z0 === null ? 'none' : formatValue(z0, ''),
        by === undefined ? 'starts' : zeroWords[by.zeroSequence],
        [...last.shunts, ...last.ofProject].map(describeShunt).join(', ') || 'nothing',
      ];
    }),
  };
}
