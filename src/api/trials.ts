import type { RemediesView } from '../../shared/schemas/remedies.ts';
import type {
  TrialParts,
  TrialRequest,
  TrialView,
  VariantRequest,
  VariantView,
} from '../../shared/schemas/trials.ts';
import { getJson, sendJson } from './client.ts';

const ofRun = (id: string) => `/api/runs/${encodeURIComponent(id)}`;
const ofApplication = (id: string) => `/api/applications/${encodeURIComponent(id)}`;

export const getTrialParts = (runId: string) => getJson<TrialParts>(`${ofRun(runId)}/trial-parts`);
export const getRemedies = (runId: string) => getJson<RemediesView>(`${ofRun(runId)}/remedies`);
export const tryOut = (applicationId: string, body: TrialRequest) =>
  sendJson<TrialView>('POST', `${ofApplication(applicationId)}/trials`, body);
export const listVariants = (applicationId: string) =>
  getJson<VariantView[]>(`${ofApplication(applicationId)}/variants`);
export const keepVariant = (applicationId: string, body: VariantRequest) =>
  sendJson<VariantView>('POST', `${ofApplication(applicationId)}/variants`, body);
export const deleteVariant = (applicationId: string, publicId: string) =>
  sendJson<undefined>(
    'DELETE',
    `${ofApplication(applicationId)}/variants?variant=${encodeURIComponent(publicId)}`,
  );
