import type {
  ApplicationView,
  Completeness,
  Decision,
  Deficiency,
  Move,
  ReviewerChange,
  Withdrawal,
  Worklist,
} from '../../shared/schemas/applications.ts';
import type { AuditEntryView } from '../../shared/schemas/audit.ts';
import { getJson, sendJson } from './client.ts';

const at = (id: string) => `/api/applications/${encodeURIComponent(id)}`;

export const listApplications = (query: Record<string, string | undefined>) =>
  getJson<Worklist>('/api/applications', query);
export const getApplication = (id: string) => getJson<ApplicationView>(at(id));
export const withdrawApplication = (id: string, body: Withdrawal) =>
  sendJson<ApplicationView>('POST', `${at(id)}/withdrawal`, body);
export const changeReviewer = (id: string, body: ReviewerChange) =>
  sendJson<ApplicationView>('PUT', `${at(id)}/reviewer`, body);
export const confirmCompleteness = (id: string, body: Completeness) =>
  sendJson<ApplicationView>('POST', `${at(id)}/completeness`, body);
export const askForMissing = (id: string, body: Deficiency) =>
  sendJson<ApplicationView>('POST', `${at(id)}/deficiency`, body);
export const decideApplication = (id: string, body: Decision) =>
  sendJson<ApplicationView>('POST', `${at(id)}/decision`, body);
export const recordMove = (id: string, body: Move) =>
  sendJson<ApplicationView>('POST', `${at(id)}/moves`, body);
export const listAuditEntries = (id: string) => getJson<AuditEntryView[]>(`${at(id)}/audit`);
