import { decimalsToTellApart, formatQuantity } from './format.ts';
import type { Comparison, Finding } from './schemas/findings.ts';
import { verdictWords } from './wording.ts';

interface FindingWords {
  /** The measured value with its unit. */
  value: string;
  /** The same without the project; null where that was not asked. */
  before: string | null;
  limit: string;
  /** The answer in one sentence. */
  sentence: string;
  verdict: string;
  /** Answered from a table, without numbers: value and limit are yes or no. */
  isYesOrNo: boolean;
}

const comparisonWords: Record<Comparison, string> = {
  '<=': 'at most',
  '<': 'less than',
  '>=': 'at least',
};

const decimalsOf: Readonly<Record<string, number>> = { A: 0, kW: 0, kVA: 0, '': 2, pu: 3 };

/** Amperes and kilowatts are whole, percent have at least one decimal, ratios two, voltages over nominal three. */
export function fewestDecimals(unit: string): number {
  return decimalsOf[unit] ?? 1;
}

/** A question without numbers is answered from a table: yes or no. */
function isYesOrNo(finding: Finding): boolean {
  return finding.value === null && /^(within|outside)$/.test(finding.verdict);
}

function describeLimit(finding: Finding, decimals: number): string {
  if (isYesOrNo(finding)) return 'Yes';
  if (finding.limit === null) return 'No limit set';
  return `${comparisonWords[finding.comparison]} ${formatQuantity(finding.limit, finding.unit, decimals)}`;
}

function describeAnswer(finding: Finding, value: string, limit: string): string {
  const verdict = verdictWords[finding.verdict].label;
  const note = finding.note === undefined ? '' : `: ${finding.note.replace(/\.$/, '')}`;
  if (finding.verdict === 'needs-data' || finding.verdict === 'not-applicable') return `${verdict}${note}.`;
  if (isYesOrNo(finding)) return `${value}${note}.`;
  return `${verdict}: ${value}, where the limit is ${limit}.`;
}

/**
 * How a finding reads, on the screen, on paper and in mail alike: with as many decimals as it takes that the value and
 * its limit read differently where they are different.
 */
export function describeFinding(finding: Finding): FindingWords {
  const { value, limit, unit, before } = finding;
  const fewest = fewestDecimals(unit);
  const decimals = value === null || limit === null ? fewest : decimalsToTellApart(value, limit, fewest);
  const yesOrNo = finding.verdict === 'within' ? 'Yes' : 'No';
  const valueWords = isYesOrNo(finding) ? yesOrNo : formatQuantity(value, unit, decimals);
  const limitWords = describeLimit(finding, decimals);
  return {
    value: valueWords,
    before: before === undefined || before === null ? null : formatQuantity(before, unit, decimals),
    limit: limitWords,
    sentence: describeAnswer(finding, valueWords, limitWords),
    verdict: verdictWords[finding.verdict].label,
    isYesOrNo: isYesOrNo(finding),
  };
}

/** The verdict sentence of a run: how many are within, what is outside, what could not be answered. */
export function summariseFindings(findings: readonly Finding[]): string {
  const count = (verdict: Finding['verdict']) =>
    findings.filter((finding) => finding.verdict === verdict).length;
  const outside = count('outside');
  const missing = count('needs-data');
  const answered = `${count('within')} of ${findings.length} findings are within their limit`;
  const rest = [
    outside > 0 ? `${outside} ${outside === 1 ? 'is' : 'are'} outside` : 'none is outside',
    missing > 0 ? `${missing} ${missing === 1 ? 'needs' : 'need'} data` : '',
  ].filter((part) => part !== '');
  return `${answered}; ${rest.join(', ')}.`;
}
