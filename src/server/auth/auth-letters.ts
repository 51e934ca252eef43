/** The mails about accounts. None repeats what a stranger typed: a sign-up form must not carry messages to others. */
import { limits } from '@/domain/limits.ts';
import { paths } from '@/paths.ts';
import { env } from '../env.ts';
import { composeLetter, type ComposedLetter } from '../mail/compose-letter.ts';

const url = (path: string, token?: string): string =>
  `${env().PUBLIC_URL}${path}${token ? `?token=${encodeURIComponent(token)}` : ''}`;

export const verifyLetter = (token: string): ComposedLetter =>
  composeLetter({
    subject: 'Confirm your address for Burette',
    paragraphs: [
      'Somebody, you we hope, asked for a Burette account with this address.',
      'To open it, follow the link and enter the password chosen at sign-up.',
    ],
    action: { label: 'Confirm this address', url: url(paths.verify, token) },
    closing: [
      `The link works once, for ${limits.linkHours} hours. If you did not ask, do nothing: no account is made.`,
    ],
  });

export const alreadyRegisteredLetter = (): ComposedLetter =>
  composeLetter({
    subject: 'You already have a Burette account',
    paragraphs: [
      'Somebody, you perhaps, tried to sign up to Burette with this address. It has an account already, and nothing was changed.',
    ],
    action: { label: 'Sign in', url: url(paths.signIn) },
    closing: [`Forgotten the password? Set a new one at ${url(paths.reset)}`],
  });

export const resetLetter = (token: string): ComposedLetter =>
  composeLetter({
    subject: 'Set a new Burette password',
    paragraphs: ['Somebody, you we hope, asked to set a new password for the Burette account with this address.'],
    action: { label: 'Set a new password', url: url(paths.reset, token) },
    closing: [
      `The link works once, for ${limits.resetMinutes} minutes. If you did not ask, do nothing: the password stays as it is.`,
    ],
  });

export const passwordChangedLetter = (): ComposedLetter =>
  composeLetter({
    subject: 'Your Burette password was changed',
    paragraphs: [
      'The password of your Burette account has just been changed, and you were signed out everywhere else. API tokens keep working.',
    ],
    closing: [
      `If that was not you, set a new password at once at ${url(paths.reset)}, then look through your API tokens and revoke those you do not know.`,
    ],
  });

export const secondFactorLetter = (state: 'on' | 'off'): ComposedLetter =>
  composeLetter({
    subject: `The second factor of your Burette account is ${state}`,
    paragraphs: [
      state === 'on'
        ? 'From now on signing in asks for a code of your authenticator app beside the password. Keep the recovery codes where you will find them without it.'
        : 'Signing in asks for the password alone again. Your recovery codes no longer work.',
    ],
    closing: [`If that was not you, set a new password at once at ${url(paths.reset)}.`],
  });

export const recoveryCodeUsedLetter = (left: number): ComposedLetter =>
  composeLetter({
    subject: 'A recovery code of your Burette account was used',
    paragraphs: [
      `One of your recovery codes stood in for your authenticator app; it does not work again. ${left} of them are left.`,
    ],
    closing: [`If that was not you, set a new password at once at ${url(paths.reset)}.`],
  });
