import type { FileView } from '../../shared/schemas/files.ts';
import { uploadFile } from './client.ts';

export const sendFile = (file: File, onProgress: (percent: number) => void) =>
  uploadFile<FileView>('/api/files', file, onProgress);
