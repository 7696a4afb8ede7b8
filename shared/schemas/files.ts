import type { PaperPurpose } from './answers.ts';

export const largestFileBytes = 20 * 1024 * 1024;
export const fileKinds = {
  'application/pdf': ['.pdf'],
  'image/png': ['.png'],
  'image/jpeg': ['.jpg', '.jpeg'],
} as const;
export type FileMediaType = keyof typeof fileKinds;

export interface FileView {
  publicId: string;
  name: string;
  mediaType: FileMediaType;
  sizeBytes: number;
  uploadedAt: string;
}

export interface PaperView extends FileView {
  purpose: PaperPurpose;
}
