export interface AuditEntryView {
  chain: string;
  seq: number;
  at: string;
  actor: string;
  action: string;
  subject: string;
  before: unknown;
  after: unknown;
  hash: string;
}
