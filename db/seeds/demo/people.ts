import type { Role } from '../../../shared/schemas/sessions.ts';

export interface DemoOrganisation {
  code: string;
  name: string;
}

export interface DemoPerson {
  name: string;
  email: string;
  role: Role;
  /** Staff of the utility have none. */
  organisation: string | null;
  /** In plain words because the demo's sign-in page shows it; no other installation ever has these accounts. */
  password: string;
  /** One account a role is listed on the sign-in page. */
  isListed: boolean;
}

export const demoOrganisations: readonly DemoOrganisation[] = [
  { code: 'greenmarch', name: 'Greenmarch Solar' },
  { code: 'vale-farms', name: 'Tessaly Vale Farm Energy' },
  { code: 'okonjo', name: 'Okonjo & Lund Developments' },
  { code: 'lathbourne', name: 'Lathbourne Dairies' },
  { code: 'hearthside', name: 'Hearthside Electrical' },
];

function person(
  name: string,
  email: string,
  role: Role,
  organisation: string | null,
  isListed = false,
): DemoPerson {
  const password = `${email.split('@')[0]}-copper-larch`;
  return { name, email, role, organisation, password, isListed };
}

export const demoPeople: readonly DemoPerson[] = [
  person('Ines Varga', 'ines@greenmarch.example', 'applicant', 'greenmarch', true),
  person('Tobiah Reyes', 'tobiah@marrowbank.example', 'reviewer', null, true),
  person('Maren Falk', 'maren@marrowbank.example', 'planner', null, true),
  person('Adaeze Nwosu', 'adaeze@marrowbank.example', 'administrator', null, true),
  person('Pell Harrow', 'pell@marrowbank.example', 'auditor', null, true),
  person('Yuki Tanabe', 'yuki@marrowbank.example', 'reviewer', null),
  person('Samir Haddad', 'samir@greenmarch.example', 'applicant', 'greenmarch'),
  person('Briony Castell', 'briony@valefarms.example', 'applicant', 'vale-farms'),
  person('Chidi Okonjo', 'chidi@okonjolund.example', 'applicant', 'okonjo'),
  person('Petra Lund', 'petra@okonjolund.example', 'applicant', 'okonjo'),
  person('Rosalind Achterberg', 'rosalind@lathbourne.example', 'applicant', 'lathbourne'),
  person('Dov Mirza', 'dov@hearthside.example', 'applicant', 'hearthside'),
];
