/** The second factor of one's own account: codes of an authenticator app, with recovery codes. */
import { z } from 'zod';
import { oneTimeCode, presentPassword } from './auth.ts';
import { contract } from './contract.ts';

const access = { kind: 'signedIn' } as const;
const refusals = ['not_signed_in', 'forbidden', 'invalid_input', 'rate_limited', 'origin_refused'] as const;

export const readSecondFactor = contract({
  id: 'readSecondFactor',
  feature: 'auth',
  method: 'GET',
  path: '/api/v1/account/second-factor',
  summary: 'Whether sign-in asks for a second factor, and how many recovery codes are left',
  access,
  answers: [
    {
      status: 200,
      description: 'The second factor',
      schema: z.object({ on: z.boolean(), recoveryCodesLeft: z.number().int() }),
    },
  ],
  refusals: ['not_signed_in', 'forbidden'],
});

export const beginSecondFactor = contract({
  id: 'beginSecondFactor',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/account/second-factor',
  summary: 'Make the secret for an authenticator app; in force once a first code confirms it',
  access,
  body: z.strictObject({ presentPassword }),
  answers: [
    {
      status: 201,
      description: 'The secret in base32, and the address that apps read; shown this once',
      schema: z.object({ secret: z.string(), uri: z.string() }),
    },
  ],
  refusals: [...refusals, 'wrong_credentials', 'second_factor_on'],
});

export const confirmSecondFactor = contract({
  id: 'confirmSecondFactor',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/account/second-factor/confirm',
  summary: 'Turn the second factor on by a first code',
  access,
  body: z.strictObject({ code: oneTimeCode }),
  answers: [
    {
      status: 200,
      description: 'On; the recovery codes cannot be shown again',
      schema: z.object({ recoveryCodes: z.array(z.string()) }),
    },
  ],
  refusals: [...refusals, 'wrong_code', 'second_factor_on', 'second_factor_off'],
});

export const removeSecondFactor = contract({
  id: 'removeSecondFactor',
  feature: 'auth',
  method: 'POST',
  path: '/api/v1/account/second-factor/remove',
  summary: 'Turn the second factor off, with the password and a code',
  access,
  body: z.strictObject({ presentPassword, code: oneTimeCode }),
  answers: [{ status: 204, description: 'Off' }],
  refusals: [...refusals, 'wrong_credentials', 'wrong_code', 'second_factor_off'],
});

export const secondFactorContracts = [readSecondFactor, beginSecondFactor, confirmSecondFactor, removeSecondFactor];
