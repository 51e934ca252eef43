/** Automatic top-up: a saved card is charged for a pack when less than a threshold is available, under a monthly ceiling. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { cardAnswer } from './cards.ts';
import { contract } from './contract.ts';
import { currency, money, pack } from './purchase.ts';
import { topUp } from './top-up.ts';

const team = ['not_signed_in', 'not_found', 'forbidden'] as const;
const positive = z.number().int().positive('An amount is above 0.').max(limits.integer);

export const automaticTopUp = z.object({
  /** `unset`: never set up; `stopped`: switched off by us because a payment did not pass. */
  state: z.enum(['unset', 'off', 'on', 'stopped']),
  /** Why it was stopped, in words. */
  problem: z.string().nullable(),
  settings: z.object({ thresholdMicrocredits: z.number().int(), pack: z.string(), monthlyCeiling: money }).nullable(),
  /** What one costs now, tax included; null when it is not set up or its pack is no longer sold. */
  nextTotal: money.nullable(),
  month: z.string(),
  timeZone: z.string(),
  /** Of this month, tax included: what passed and what is on its way. */
  spentThisMonth: money.nullable(),
  /** The month’s ceiling leaves no room for another one. */
  ceilingReached: z.boolean(),
  availableMicrocredits: z.number().int(),
  ...cardAnswer.shape,
  /** The latest ten, newest first. */
  attempts: z.array(topUp),
});
export type AutomaticTopUpDocument = z.infer<typeof automaticTopUp>;

const answer = z.object({ automaticTopUp });

export const readAutomaticTopUp = contract({
  id: 'readAutomaticTopUp',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/automatic-top-up',
  summary: 'Settings, state, saved card and latest attempts of automatic top-up',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Automatic top-up', schema: answer }],
  refusals: [...team],
});

export const setAutomaticTopUp = contract({
  id: 'setAutomaticTopUp',
  feature: 'billing',
  method: 'PUT',
  path: '/api/v1/teams/{team}/automatic-top-up',
  summary: 'Set up automatic top-up and switch it on or off',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.strictObject({
    on: z.boolean(),
    /** A top-up begins when less than this is available. */
    thresholdMicrocredits: positive,
    pack,
    currency,
    /** Most that is charged in a calendar month of the team’s time zone, tax included, minor units of `currency`. */
    monthlyCeilingMinor: positive,
  }),
  answers: [{ status: 200, description: 'Stored', schema: answer }],
  refusals: [...team, 'team_suspended', 'invalid_input', 'unknown_pack', 'card_missing'],
});

export const automaticTopUpContracts = [readAutomaticTopUp, setAutomaticTopUp];
