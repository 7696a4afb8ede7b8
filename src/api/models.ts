import type { ModelDrawing, NetworkModelView } from '../../shared/schemas/territory.ts';
import { getJson } from './client.ts';

export function listModels(): Promise<NetworkModelView[]> {
  return getJson('/api/models');
}

export function getModelDrawing(code: string): Promise<ModelDrawing> {
  return getJson(`/api/models/${encodeURIComponent(code)}/drawing`);
}
