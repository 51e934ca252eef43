/** What the matrix sends to each endpoint: a request that only authorisation could refuse. A contract without one fails. */
import type { Team, User } from '@db/models/people.ts';
import type { Contract } from '@/contracts/contract.ts';
import { tokenScopes, permissionsOfRole, type Role, type TokenScope } from '@/domain/teams/permissions.ts';
import { bearerHeaders, makeTeam, makeUser, signedInHeaders, type MadeTeam } from '../factories/people.ts';
import type { Call } from '../support/call-endpoint.ts';

export interface Case {
  /** Values of `{…}` but the team; by default the id of something that is not there. */
  parameters?: Record<string, string>;
  query?: string;
  body?: object | string | ((ids: Record<string, string>) => object);
  contentType?: string;
}

const plain: Case = {};
const network = {
  species: [{ id: 'A', initialCount: 10 }],
  parameters: [{ id: 'k', value: 1 }],
  reactions: [{ id: 'decay', equation: 'A → ∅', rateLaw: { kind: 'massAction', constant: 'k' } }],
};
const token = 'a-token-that-nobody-was-given';
const password = 'seven quiet herons wade';
const quote = {
  modelVersionId: 'version_none',
  replicates: 100,
  horizon: 1,
  gridIntervals: 10,
  method: 'exact',
  lane: 'steady',
};
const sbml = '<sbml xmlns="http://www.sbml.org/sbml/level3/version2/core" level="3" version="2"><model id="m"/></sbml>';
const address = 'invited@matrix.example';
const rates = { exact: 1, leap: 1 };

export const cases: Record<string, Case> = {
  health: plain,
  openApi: plain,
  // auth
  signUp: { body: { email: address, name: 'Ada', password, teamName: 'Ada’s' } },
  verifyEmail: { body: { token, password } },
  signIn: { body: { email: address, password } },
  signOut: plain,
  requestReset: { body: { email: address } },
  resetPassword: { body: { token, password } },
  showInvitation: { body: { token } },
  acceptInvitation: { body: { token } },
  readAccount: plain,
  changeAccount: { body: { name: 'Ada' } },
  changePassword: { body: { presentPassword: 'copper kettle nine drums', newPassword: password } },
  listSessions: plain,
  endSession: plain,
  readSecondFactor: plain,
  beginSecondFactor: { body: { presentPassword: 'copper kettle nine drums' } },
  confirmSecondFactor: { body: { code: '000000' } },
  removeSecondFactor: { body: { presentPassword: 'copper kettle nine drums', code: '000000' } },
  // teams
  listTeams: plain,
  readTeam: plain,
  changeTeam: { body: { name: 'Renamed' } },
  listMembers: plain,
  changeMember: { body: { roles: ['viewer'] } },
  removeMember: plain,
  leaveTeam: plain,
  listInvitations: plain,
  inviteMember: { body: { email: address, roles: ['viewer'] } },
  resendInvitation: plain,
  revokeInvitation: plain,
  listProjectCodes: plain,
  createProjectCode: { body: { code: 'MATRIX-1' } },
  changeProjectCode: { body: { closed: true } },
  listTokens: plain,
  createToken: { body: { name: 'script', scopes: ['models:read'] } },
  revokeToken: plain,
  // webhooks
  listWebhooks: plain,
  createWebhook: { body: { url: 'https://hooks.matrix.example/burette', kinds: ['job_finished'] } },
  changeWebhook: { body: { paused: true } },
  removeWebhook: plain,
  listDeliveries: plain,
  redeliverWebhook: plain,
  // network
  createModel: { body: { name: 'Decay', network } },
  listModels: plain,
  readModel: plain,
  updateModel: { body: { name: 'Renamed' } },
  saveVersion: { body: { network, basedOn: 1 } },
  readVersion: { parameters: { version: '1' } },
  exportSbml: { parameters: { version: '1' } },
  importSbml: { body: sbml, contentType: 'application/sbml+xml' },
  // jobs
  createQuote: { body: quote },
  readQuote: plain,
  launchJob: { body: { quoteId: 'quote_none', name: 'Job' } },
  listJobs: plain,
  readJob: plain,
  cancelJob: { body: {} },
  extendJob: { body: (ids) => ({ quoteId: ids['quote'] ?? 'quote_none' }) },
  jobProgress: plain,
  jobStatistics: plain,
  jobPassages: plain,
  jobCorrelations: plain,
  readSweep: { query: '?observable=A' },
  jobDistribution: { query: '?observable=A&time=1' },
  jobTraces: plain,
  jobBatches: plain,
  readJobCost: plain,
  downloadArchive: plain,
  listArchiveFiles: plain,
  // ledger and billing
  readCredits: plain,
  listLedger: plain,
  exportLedger: plain,
  readPriceBook: plain,
  startTopUp: { body: { pack: 'none', currency: 'GBP' } },
  listTopUps: plain,
  readTopUp: plain,
  readBillingDetails: plain,
  setBillingDetails: { body: { name: 'Ada Ltd', address: '1 Row', country: 'GB' } },
  listInvoices: plain,
  readInvoice: plain,
  exportInvoices: plain,
  downloadInvoices: plain,
  readInvoiceTrail: plain,
  listInvoiceMessages: plain,
  writeInvoiceMessage: { body: { body: 'Which order is this?' } },
  downloadInvoicePdf: plain,
  downloadInvoiceUbl: plain,
  reviewInvoice: { body: { state: 'approved' } },
  requestProForma: { body: { pack: 'none', currency: 'GBP', purchaseOrder: 'PO 1' } },
  listProFormas: plain,
  downloadProFormaPdf: plain,
  markTransferReceived: plain,
  readStatement: plain,
  listStatementLines: plain,
  exportStatement: plain,
  readYearSummary: plain,
  exportYearSummary: plain,
  readCard: plain,
  saveCard: { body: {} },
  removeCard: plain,
  readAutomaticTopUp: plain,
  setAutomaticTopUp: {
    body: { on: false, thresholdMicrocredits: 1, pack: 'none', currency: 'GBP', monthlyCeilingMinor: 1 },
  },
  readBudgets: plain,
  setBudgets: { body: { monthlyMicrocredits: null, lowBalanceMicrocredits: null } },
  // our books
  readBooks: plain,
  listPriceBooks: plain,
  addPriceBook: {
    body: {
      startsAt: '2020-01-01T00:00:00Z',
      microcreditsPerMillionEvents: { steady: rates, express: rates, overnight: rates },
      packs: [{ credits: 1, netMinor: { EUR: 1, GBP: 1, USD: 1 } }],
    },
  },
  grantGoodwill: { body: { team: 'nobody-here', microcredits: 1, reason: 'Goodwill' } },
  listOpenTransfers: plain,
  listQuestionedInvoices: plain,
  readQuestionedInvoice: plain,
  answerInvoice: { body: { body: 'It is the order of May.' } },
  listOperatorActs: plain,
  readRefundable: plain,
  listDisputes: plain,
  decideReceivable: { body: { outcome: 'settled', reason: 'Paid.' } },
  refundPurchase: { body: { reason: 'Asked for.' } },
  receivePaymentEvent: { body: '{}', contentType: 'application/json' },
};

export const principals = [
  'owner',
  'finance',
  'modeller',
  'viewer',
  'owner of another team',
  'operator',
  'signed out',
  'token with the scope',
  'token without the scope',
  'token of another team',
] as const;
export type Principal = (typeof principals)[number];

/** `through`: past authorisation, whatever the service then says. */
export type Expected = 'through' | 'not_signed_in' | 'forbidden' | 'not_found';

const isRole = (principal: Principal): principal is Role => principal in permissionsOfRole;
const isToken = (principal: Principal): boolean => principal.startsWith('token');

/** Stated apart from the code under test, from the contract's access and the table of permissions alone. */
export function expected(contract: Contract, principal: Principal): Expected {
  const { access } = contract;
  if (access.kind === 'public') return 'through';
  if (principal === 'signed out') return 'not_signed_in';
  if (access.kind === 'signedIn') return isToken(principal) ? 'forbidden' : 'through';
  if (access.kind === 'operator') return principal === 'operator' ? 'through' : 'not_found';
  if (isRole(principal)) return permissionsOfRole[principal].includes(access.permission) ? 'through' : 'forbidden';
  if (principal === 'token with the scope')
    return tokenScopes.includes(access.permission as TokenScope) ? 'through' : 'forbidden';
  return principal === 'token without the scope' ? 'forbidden' : 'not_found';
}

export interface Stage {
  made: MadeTeam;
  outsider: { team: Team; owner: User };
  operator: User;
}

export async function setStage(): Promise<Stage> {
  const made = await makeTeam();
  const other = await makeTeam();
  const operator = await makeUser({ operator: true });
  return { made, outsider: { team: other.team, owner: other.people.owner }, operator };
}

/** Headers of a principal: real sessions, real tokens. */
export async function headersOf(
  principal: Principal,
  contract: Contract,
  stage: Stage,
): Promise<Record<string, string>> {
  const { made, outsider, operator } = stage;
  const user = made.people.owner;
  const { team } = made;
  const { access } = contract;
  const scopes = tokenScopes.filter((scope) => access.kind !== 'team' || scope !== access.permission);
  switch (principal) {
    case 'owner of another team':
      return signedInHeaders(outsider.owner);
    case 'operator':
      return signedInHeaders(operator);
    case 'signed out':
      return { Origin: 'http://burette.test' };
    case 'token with the scope':
      return bearerHeaders({ user, team });
    case 'token without the scope':
      return bearerHeaders({ user, team, scopes });
    case 'token of another team':
      return bearerHeaders({ user: outsider.owner, team: outsider.team });
    default:
      return signedInHeaders(made.people[principal]);
  }
}

/** `ids` are real ones, for telling another team's things from things that are not there. */
export function callOf(
  contract: Contract,
  team: string,
  headers: Record<string, string>,
  ids: Record<string, string> = {},
): Call {
  const { query = '', body, contentType, ...stated } = cases[contract.id]!;
  const parameters: Record<string, string> = { ...stated.parameters, ...ids };
  const filled = contract.path.replaceAll(/\{(\w+)\}/g, (_, name: string) =>
    name === 'team' ? team : (parameters[name] ?? `${name}_none`),
  );
  return {
    method: contract.method,
    path: filled + query,
    headers: { ...headers, ...(contentType ? { 'Content-Type': contentType } : {}) },
    ...(body === undefined ? {} : { body: typeof body === 'function' ? body(ids) : body }),
  };
}

/** What an answer says about authorisation. */
export async function outcomeOf(response: Response): Promise<Expected | string> {
  if (response.status < 400) {
    await response.body?.cancel();
    return 'through';
  }
  const text = await response.text();
  const problem = (text === '' ? {} : JSON.parse(text)) as { code?: string; detail?: string };
  if (response.status >= 500 && problem.code !== 'payment_service_unavailable') return `failed: ${text}`;
  if (problem.code === 'not_signed_in' && response.status === 401) return 'not_signed_in';
  if (problem.code === 'forbidden' && response.status === 403) return 'forbidden';
  const aboutTeam = problem.detail?.includes('no such team') || problem.detail === 'There is nothing here.';
  if (problem.code === 'not_found' && response.status === 404) return aboutTeam ? 'not_found' : 'through';
  return problem.code === undefined || problem.code === 'origin_refused' ? `unexpected: ${text}` : 'through';
}
