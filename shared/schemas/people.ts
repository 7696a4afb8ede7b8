import type { Role } from './sessions.ts';

export interface PersonView {
  publicId: string;
  name: string;
  email: string;
  role: Role;
  organisation: string | null;
  disabled: boolean;
}

export interface RuleSetVersionView {
  code: string;
  number: number;
  name: string;
  validFrom: string;
  firstUsedAt: string | null;
  sha256: string;
  limits: { question: string; limit: string; source: string; standing: 'read' | 'memory' }[];
}
