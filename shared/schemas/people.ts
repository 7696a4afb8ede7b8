import type { Role } from './sessions.ts';

export interface PersonView {
  publicId: string;
  name: string;
  email: string;
  role: Role;
  organisation: string | null;
  disabled: boolean;
}
