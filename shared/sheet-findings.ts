import { drawFindingLine } from './drawings/finding-line.ts';
import { describeFinding } from './finding-words.ts';
import { printStep } from './quantity-words.ts';
import type { SheetFinding } from './schemas/sheets.ts';
import type { SheetBlock } from './sheet-blocks.ts';
import { verdictWords } from './wording.ts';

/** Where the working of a finding stands on its sheet: `element` and question together are one of a kind. */
export function findingAnchor({ id, element }: { id: string; element?: string }): string {
  const marked = element === undefined ? '' : `-${element.replace(/\W+/g, '-')}`;
  return `finding-${id}${marked}`;
}

/** One finding: its limit line, the answer in words, then step by step how it came about. */
export function layOutFinding({ finding, working }: SheetFinding): SheetBlock[] {
  const words = describeFinding(finding);
  const drawing = drawFindingLine(finding);
  const blocks: SheetBlock[] = [
    {
      kind: 'heading',
      text: finding.question,
      id: findingAnchor(finding),
      note: `${words.verdict}${finding.element === undefined ? '' : `, at ${finding.element}`}`,
      tone: verdictWords[finding.verdict].tone,
      folds: finding.verdict === 'within' || finding.verdict === 'not-applicable',
    },
  ];
  if (drawing) blocks.push({ kind: 'drawing', drawing, isTold: true });
  const measured = finding.value === null ? [] : [{ term: 'Measured', value: words.value, isFigure: true }];
  const before =
    words.before === null ? [] : [{ term: 'Before the project', value: words.before, isFigure: true }];
  const limit = finding.limit === null ? [] : [{ term: 'Limit', value: words.limit, isFigure: true }];
  blocks.push({
    kind: 'facts',
    facts: [...measured, ...before, ...limit, { term: 'Source of the limit', value: finding.source }],
  });
  if (finding.note !== undefined) blocks.push({ kind: 'words', text: finding.note });
  if (working.length > 0) {
    blocks.push({ kind: 'steps', caption: `Working: ${finding.question}`, steps: working.map(printStep) });
  } else {
    const text =
      finding.value === null
        ? 'Nothing was computed: the answer follows from what the study file and the rules say.'
        : 'The value follows from the fault currents and duties above.';
    blocks.push({ kind: 'words', text });
  }
  return blocks;
}
