import type {
  PreApplicationReport,
  PreApplicationRequest,
} from '../../shared/schemas/pre-application-reports.ts';
import { getJson, sendJson } from './client.ts';

const path = '/api/pre-application-reports';
const at = (id: string) => `${path}/${encodeURIComponent(id)}`;

export const listPreApplicationReports = () => getJson<PreApplicationReport[]>(path);
export const getPreApplicationReport = (id: string) => getJson<PreApplicationReport>(at(id));
export const requestPreApplicationReport = (body: Partial<PreApplicationRequest>) =>
  sendJson<PreApplicationReport>('POST', path, body);
/** Where a browser saves the report from. */
export const reportFile = (id: string, paper: 'a4' | 'letter') => `${at(id)}/pdf?paper=${paper}`;
