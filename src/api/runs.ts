import type { Waiver, WaiverAgreement } from '../../shared/schemas/applications.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import { getJson, sendJson } from './client.ts';

const at = (id: string) => `/api/runs/${encodeURIComponent(id)}`;

export const getRun = (id: string) => getJson<RunView>(at(id));
export const listRuns = (applicationId: string) =>
  getJson<RunView[]>(`/api/applications/${encodeURIComponent(applicationId)}/runs`);
export const screenAgain = (applicationId: string) =>
  sendJson<RunView>('POST', `/api/applications/${encodeURIComponent(applicationId)}/runs`, {});
export const waiveFinding = (id: string, body: Waiver) => sendJson<RunView>('PUT', `${at(id)}/waivers`, body);
/** The second person's, with the reason as it was read. */
export const agreeToWaiver = (id: string, body: WaiverAgreement) =>
  sendJson<RunView>('PUT', `${at(id)}/waivers/agreement`, body);
export const takeBackWaiver = (id: string, question: string, element: string) => {
  const query = new URLSearchParams({ question, element });
  return sendJson<RunView>('DELETE', `${at(id)}/waivers?${query}`);
};
/** Where the exact stored bytes are downloaded from. */
export const studyHref = (id: string) => `${at(id)}/study`;
export const resultHref = (id: string) => `${at(id)}/result`;
