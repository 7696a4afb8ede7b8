import { eventWords } from '../../../shared/event-words.ts';
import { stageWords, waitingWords } from '../../../shared/wording.ts';

/** What is written to the record and is no event of the application's life. */
const otherActions: Record<string, string> = {
  take: 'Taken by a reviewer',
  'put-back': 'Put back',
  'keep-trial': 'Trial kept',
  'delete-trial': 'Kept trial deleted',
  'set-finding-aside': 'Finding set aside',
  'take-back-waiver': 'Finding counts again',
  'screen-again': 'Screened again',
  'retry-run': 'Stopped screening tried again',
  'retry-mail': 'Stopped mail tried again',
};

const fieldWords: Record<string, string> = {
  waitingOn: 'Who acts next',
  runId: 'Run',
  sha256: 'SHA-256',
};

export function writeAction(action: string): string {
  return { ...eventWords, ...otherActions }[action] ?? writeName(action);
}

/** The name and role out of "Mira Holt, reviewer, 4dS…"; the id behind them tells apart two of one name. */
export function writeActor(actor: string): string {
  const parts = actor.split(', ');
  return parts.length > 2 ? parts.slice(0, -1).join(', ') : actor;
}

function writeName(name: string): string {
  const words = name
    .replace(/([a-z\d])([A-Z])/g, '$1 $2')
    .replace(/[-_]/g, ' ')
    .toLowerCase();
  return fieldWords[name] ?? words.charAt(0).toUpperCase() + words.slice(1);
}

function writeValue(name: string, value: unknown): string {
  if (value === null || value === '') return 'Nothing';
  if (typeof value === 'boolean') return value ? 'Yes' : 'No';
  const words: Record<string, string> =
    name === 'stage'
      ? Object.fromEntries(Object.entries(stageWords).map(([stage, { label }]) => [stage, label]))
      : name === 'waitingOn'
        ? waitingWords
        : {};
  return words[String(value)] ?? String(value);
}

interface RecordRow {
  key: string;
  term: string;
  value: string;
}

/** One row a value, however deep it lies: "About, conditions" and "Items 2, text". */
export function listRecordRows(written: unknown): RecordRow[] {
  return walk(written, '', '', 'written');
}

function walk(value: unknown, key: string, term: string, name: string): RecordRow[] {
  if (typeof value !== 'object' || value === null) {
    return value === null && key === ''
      ? []
      : [{ key, term: term || 'Written', value: writeValue(name, value) }];
  }
  const join = (left: string, right: string, sign: string) =>
    left === '' ? right : `${left}${sign}${right}`;
  if (Array.isArray(value)) {
    if (value.length === 0) return [{ key, term, value: 'None' }];
    return value.flatMap((item, index) =>
      walk(item, join(key, String(index), '.'), `${term} ${index + 1}`, name),
    );
  }
  return Object.entries(value).flatMap(([own, item]) => {
    const words = writeName(own);
    return walk(item, join(key, own, '.'), join(term, term === '' ? words : words.toLowerCase(), ', '), own);
  });
}
