import type { AnswerSection } from '../../shared/schemas/answers.ts';
import type {
  ApplicationView,
  DraftView,
  SaveSection,
  Submission,
} from '../../shared/schemas/applications.ts';
import { getJson, sendJson } from './client.ts';

const at = (id: string) => `/api/applications/${encodeURIComponent(id)}`;

export const startDraft = () => sendJson<DraftView>('POST', '/api/applications', {});
export const getDraft = (id: string) => getJson<DraftView>(`${at(id)}/draft`);
export const saveDraftSection = (id: string, section: AnswerSection, body: SaveSection) =>
  sendJson<DraftView>('PUT', `${at(id)}/draft/${section}`, body);
export const discardDraft = (id: string) => sendJson<void>('DELETE', `${at(id)}/draft`);
export const submitApplication = (id: string, body: Submission) =>
  sendJson<ApplicationView>('POST', `${at(id)}/submission`, body);
