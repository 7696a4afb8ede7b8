import { Type, type Static } from '@sinclair/typebox';

export const roles = ['applicant', 'reviewer', 'planner', 'administrator', 'auditor'] as const;
export type Role = (typeof roles)[number];

/** What a person types to sign in. */
export const SignIn = Type.Object(
  {
    email: Type.String({
      minLength: 1,
      maxLength: 254,
      errorMessage: 'Enter the e-mail address of your account',
    }),
    password: Type.String({ minLength: 1, maxLength: 200, errorMessage: 'Enter your password' }),
  },
  { additionalProperties: false },
);
export type SignIn = Static<typeof SignIn>;

export interface SignedInUser {
  publicId: string;
  name: string;
  email: string;
  role: Role;
  organisation: { publicId: string; name: string } | null;
}

/** Answer of GET, POST and DELETE /api/session. */
export interface SessionView {
  user: SignedInUser | null;
  csrfToken: string;
  demo: boolean;
  utility: { name: string; territory: string; timeZone: string; contactEmail: string };
}

/** Demo only: the accounts shown on the sign-in page. */
export interface DemoAccount {
  role: Role;
  name: string;
  email: string;
  password: string;
}
