import type { StuckWorkView } from '../../shared/schemas/stuck-work.ts';
import { getJson, sendJson } from './client.ts';

export const getStuckWork = () => getJson<StuckWorkView>('/api/stuck-work');
export const retryRun = (id: string) =>
  sendJson<StuckWorkView>('POST', `/api/runs/${encodeURIComponent(id)}/retry`, {});
export const retryMail = (key: string) =>
  sendJson<StuckWorkView>('POST', '/api/stuck-work/mail-retries', { key });
