import type { Sheet } from '../../shared/schemas/sheets.ts';
import { getJson } from './client.ts';

const at = (runId: string) => `/api/runs/${encodeURIComponent(runId)}/sheet`;

export const getSheet = (runId: string) => getJson<Sheet>(at(runId));
/** Where the sheet is saved from as a document. */
export const sheetPdfHref = (runId: string, paper: 'a4' | 'letter') => `${at(runId)}.pdf?paper=${paper}`;
