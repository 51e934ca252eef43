/** Sign-up, sign-in, sign-out, verification, reset, invitations as their receiver sees them, one's own account. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { roles } from '@/domain/teams/permissions.ts';
import { contract } from './contract.ts';

export const emailAddress = z.string().trim().toLowerCase().max(254).pipe(z.email('This is not an e-mail address.'));

/** One line of visible text: no control characters, so that it is safe in a mail's header. */
export const lineOfText = (maximum: number = limits.nameCharacters): z.ZodString =>
  z
    .string()
    .trim()
    .min(1, 'This is needed.')
    .max(maximum)
    .regex(/^\P{Cc}*$/u, 'One line of text, please.');

const newPassword = z
  .string()
  .min(limits.passwordCharactersMinimum, `At least ${limits.passwordCharactersMinimum} characters.`)
  .max(limits.passwordCharacters);
/** A password that is only compared: its length says nothing. */
export const presentPassword = z.string().min(1).max(limits.passwordCharacters);
/** Six figures of an authenticator app, or a recovery code. */
export const oneTimeCode = z.string().trim().min(1).max(40);
/** Where it is needed only of who has a second factor; a form sends it empty. */
const optionalCode = z
  .string()
  .trim()
  .max(40)
  .transform((code) => (code === '' ? undefined : code))
  .optional();
const linkToken = z.string().min(1).max(200);

const said = z.object({ message: z.string() });
export const membershipSummary = z.object({ slug: z.string(), name: z.string(), roles: z.array(z.enum(roles)) });
export const signedInPerson = z.object({
  person: z.object({ id: z.string(), name: z.string(), email: z.string() }),
  teams: z.array(membershipSummary),
});

export const signUp = contract({
  id: 'signUp',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/sign-up',
  summary: 'Ask for an account and a team; the answer is the same whether the address is known or not',
  access: { kind: 'public' },
  body: z.strictObject({ email: emailAddress, name: lineOfText(), password: newPassword, teamName: lineOfText(80) }),
  answers: [{ status: 202, description: 'A mail is on its way', schema: said }],
  refusals: ['invalid_input', 'password_too_weak', 'rate_limited', 'origin_refused'],
});

export const verifyEmail = contract({
  id: 'verifyEmail',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/verify',
  summary: 'Confirm the address with the token of the mail and the password chosen at sign-up; signs in',
  access: { kind: 'public' },
  body: z.strictObject({ token: linkToken, password: presentPassword }),
  answers: [
    {
      status: 200,
      description: 'Verified and signed in',
      schema: signedInPerson.extend({ team: membershipSummary }),
    },
  ],
  refusals: ['invalid_input', 'link_expired', 'wrong_credentials', 'rate_limited', 'origin_refused'],
});

export const signIn = contract({
  id: 'signIn',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/sign-in',
  summary: 'Sign in; sets the session cookie. Where a second factor is on, with its code',
  access: { kind: 'public' },
  body: z.strictObject({ email: emailAddress, password: presentPassword, code: optionalCode }),
  answers: [{ status: 200, description: 'Signed in', schema: signedInPerson }],
  refusals: [
    'invalid_input',
    'wrong_credentials',
    'second_factor_needed',
    'wrong_code',
    'rate_limited',
    'origin_refused',
  ],
});

export const signOut = contract({
  id: 'signOut',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/sign-out',
  summary: 'End this session; harmless without one',
  access: { kind: 'public' },
  answers: [{ status: 204, description: 'Signed out' }],
  refusals: ['origin_refused'],
});

export const requestReset = contract({
  id: 'requestReset',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/reset-request',
  summary: 'Ask for a link that sets a new password; the answer is the same whether the address is known or not',
  access: { kind: 'public' },
  body: z.strictObject({ email: emailAddress }),
  answers: [{ status: 202, description: 'If there is an account, a mail is on its way', schema: said }],
  refusals: ['invalid_input', 'rate_limited', 'origin_refused'],
});

export const resetPassword = contract({
  id: 'resetPassword',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/reset',
  summary: 'Set a new password with the token of the mail; ends every session and begins a new one here',
  access: { kind: 'public' },
  body: z.strictObject({ token: linkToken, password: newPassword, code: optionalCode }),
  answers: [{ status: 200, description: 'Changed and signed in', schema: signedInPerson }],
  refusals: [
    'invalid_input',
    'link_expired',
    'password_too_weak',
    'second_factor_needed',
    'wrong_code',
    'rate_limited',
    'origin_refused',
  ],
});

export const showInvitation = contract({
  id: 'showInvitation',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/invitations/show',
  summary: 'What an invitation offers, for the one who holds its token',
  access: { kind: 'public' },
  body: z.strictObject({ token: linkToken }),
  answers: [
    {
      status: 200,
      description: 'The invitation; hasAccount tells whether to sign in first or to choose a password',
      schema: z.object({
        invitation: z.object({
          email: z.string(),
          teamName: z.string(),
          invitedBy: z.string(),
          roles: z.array(z.enum(roles)),
          expiresAt: z.string(),
          hasAccount: z.boolean(),
        }),
      }),
    },
  ],
  refusals: ['invalid_input', 'link_expired', 'rate_limited', 'origin_refused'],
});

export const acceptInvitation = contract({
  id: 'acceptInvitation',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/auth/invitations/accept',
  summary: 'Join the team: signed in under the invited address, or with a name and a password for a new account',
  access: { kind: 'public' },
  body: z.strictObject({ token: linkToken, name: lineOfText().optional(), password: newPassword.optional() }),
  answers: [
    { status: 200, description: 'Joined and signed in', schema: signedInPerson.extend({ team: membershipSummary }) },
  ],
  refusals: [
    'invalid_input',
    'link_expired',
    'not_signed_in',
    'forbidden',
    'already_a_member',
    'limit_reached',
    'password_too_weak',
    'rate_limited',
    'origin_refused',
  ],
});

export const readAccount = contract({
  id: 'readAccount',
  feature: 'auth',
  method: 'GET',
  path: '/api/v1/account',
  summary: 'The person signed in and their teams',
  access: { kind: 'signedIn' },
  answers: [{ status: 200, description: 'The account', schema: signedInPerson }],
  refusals: ['not_signed_in', 'forbidden'],
});

export const changeAccount = contract({
  id: 'changeAccount',
  feature: 'auth',
  method: 'PATCH',
  path: '/api/v1/account',
  summary: 'Change one’s name',
  access: { kind: 'signedIn' },
  body: z.strictObject({ name: lineOfText() }),
  answers: [{ status: 200, description: 'The account', schema: signedInPerson }],
  refusals: ['not_signed_in', 'forbidden', 'invalid_input', 'origin_refused'],
});

export const changePassword = contract({
  id: 'changePassword',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/account/password',
  summary: 'Change one’s password; ends every other session',
  access: { kind: 'signedIn' },
  body: z.strictObject({ presentPassword, newPassword }),
  answers: [{ status: 204, description: 'Changed' }],
  refusals: [
    'not_signed_in',
    'forbidden',
    'invalid_input',
    'wrong_credentials',
    'password_too_weak',
    'rate_limited',
    'origin_refused',
  ],
});

export const listSessions = contract({
  id: 'listSessions',
  feature: 'auth',
  method: 'GET',
  path: '/api/v1/account/sessions',
  summary: 'Where one is signed in',
  access: { kind: 'signedIn' },
  answers: [
    {
      status: 200,
      description: 'Sessions, newest first',
      schema: z.object({
        sessions: z.array(
          z.object({
            id: z.string(),
            createdAt: z.string(),
            expiresAt: z.string(),
            userAgent: z.string().nullable(),
            address: z.string().nullable(),
            present: z.boolean(),
          }),
        ),
        nextCursor: z.null(),
      }),
    },
  ],
  refusals: ['not_signed_in', 'forbidden'],
});

export const endSession = contract({
  id: 'endSession',
  feature: 'auth',
  method: 'DELETE',
  path: '/api/v1/account/sessions/{session}',
  summary: 'Sign out elsewhere: end one of one’s own sessions',
  access: { kind: 'signedIn' },
  answers: [{ status: 204, description: 'Ended' }],
  refusals: ['not_signed_in', 'forbidden', 'not_found', 'origin_refused'],
});

export const authContracts = [
  signUp,
  verifyEmail,
  signIn,
  signOut,
  requestReset,
  resetPassword,
  showInvitation,
  acceptInvitation,
  readAccount,
  changeAccount,
  changePassword,
  listSessions,
  endSession,
];
