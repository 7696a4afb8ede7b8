import type { AnswerSection } from '../../shared/schemas/answers.ts';
import type { DecisionKind } from '../../shared/schemas/applications.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import type { RunKind } from '../../shared/schemas/runs.ts';
import type { Stage } from '../../shared/rules/application-life.ts';

/** What every mail about an application says. */
export interface MailSubject {
  /** As people quote it: "ML-1042". */
  reference: string;
  projectName: string;
  contactName: string;
  /** Below the desk's address: "/projects/…". */
  applicationPath: string;
}

/** What each kind of mail says beside that; dates are local, YYYY-MM-DD. */
interface MailPayloads {
  submitted: { receivedOn: string; completenessDueOn: string };
  deficiency: { items: { section: AnswerSection; text: string }[]; replyDueOn: string };
  complete: { queuePosition: number; reviewDueOn: string };
  'screening-done': { runKind: RunKind };
  decision: {
    decision: DecisionKind;
    reason: string;
    conditions: string | null;
    /** As released to the applicant: without elements. */
    findings: Finding[];
    waivers: { question: string; reason: string }[];
    runPublicId: string;
  };
  withdrawn: { reason: string };
  moved: { stage: Stage; note: string };
}

export type MailKind = keyof MailPayloads;

export type MailPayload<K extends MailKind> = MailSubject & MailPayloads[K];

/** A mail to be queued: its kind decides what its payload is. */
export type Mail = {
  [K in MailKind]: {
    kind: K;
    /** One mail for each key, however often it is asked for. */
    dedupeKey: string;
    applicationId: number;
    recipient: string;
    payload: MailPayload<K>;
  };
}[MailKind];
