/** Members and open invitations: who is in the team, what each may do, who is asked to join. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { z } from 'zod';
import { callApi, type Called } from '@/components/api/call-api.ts';
import { Moment } from '@/components/ui/Amounts.tsx';
import { Button } from '@/components/ui/Button.tsx';
import { ConfirmButton, Dialog } from '@/components/ui/Dialog.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import {
  changeMember,
  listInvitations,
  listMembers,
  removeMember,
  resendInvitation,
  revokeInvitation,
  type invitationDocument,
  type memberDocument,
} from '@/contracts/teams.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { InviteForm } from './InviteForm.tsx';
import { RoleChoice } from './RoleChoice.tsx';
import { roleWords } from './role-words.ts';

export type Member = z.output<typeof memberDocument>;
export type Invitation = z.output<typeof invitationDocument>;

export interface MembersProps {
  team: string;
  timeZone: string;
  mayManage: boolean;
  ownEmail: string;
  members: Member[];
  invitations: Invitation[];
}

export function Members(props: MembersProps) {
  return (
    <QueryProvider>
      <Lists {...props} />
    </QueryProvider>
  );
}

const roleNames = (roles: readonly Role[]): string => roles.map((role) => roleWords[role].name).join(', ');

/** A team of more than this many is read on in the API; the page says so. */
const shownAtMost = 200;

function Lists({ team, timeZone, mayManage, ownEmail, members: first, invitations: asked }: MembersProps) {
  const queries = useQueryClient();
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [said, setSaid] = useState<string | null>(null);
  const [edited, setEdited] = useState<Member | null>(null);
  const members = useQuery({
    queryKey: ['members', team],
    initialData: first,
    queryFn: async () => {
      const called = await callApi(listMembers, { path: { team }, query: { limit: shownAtMost } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.members;
    },
  }).data;
  const invitations = useQuery({
    queryKey: ['invitations', team],
    initialData: asked,
    enabled: mayManage,
    queryFn: async () => {
      const called = await callApi(listInvitations, { path: { team }, query: { limit: shownAtMost } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.invitations;
    },
  }).data;

  /** Says what was done or why not, and reads both lists again. */
  async function settle(call: Promise<Called<unknown>>, words: string): Promise<boolean> {
    const called = await call;
    setProblem(called.ok ? null : called.problem);
    setSaid(called.ok ? words : null);
    await Promise.all([
      queries.invalidateQueries({ queryKey: ['members', team] }),
      queries.invalidateQueries({ queryKey: ['invitations', team] }),
    ]);
    return called.ok;
  }

  return (
    <div className="flex flex-col gap-10">
      {problem && <ProblemNotice problem={problem} />}
      {said && <Notice tone="done">{said}</Notice>}
      <ul className="-mt-6">
        {members.map((member) => (
          <li
            key={member.id}
            className="flex flex-wrap items-center justify-between gap-x-6 gap-y-2 border-b border-rule py-3"
          >
            <span className="min-w-0">
              <b className="block font-semibold [overflow-wrap:anywhere]">
                {member.name}
                {member.email === ownEmail && <span className="font-normal text-soft"> (you)</span>}
              </b>
              <span className="block text-sm text-soft [overflow-wrap:anywhere]">
                {member.email} · since <Moment time={member.joinedAt} timeZone={timeZone} dayOnly />
              </span>
            </span>
            <span className="flex flex-wrap items-center gap-2">
              <span className="mr-2 font-medium">{roleNames(member.roles)}</span>
              {mayManage && (
                <>
                  <Button size="small" aria-label={`Change roles of ${member.name}`} onClick={() => setEdited(member)}>
                    Change roles
                  </Button>
                  {member.email !== ownEmail && (
                    <ConfirmButton
                      size="small"
                      label={`Remove ${member.name}`}
                      title={`Remove ${member.name} from the team`}
                      question="Their API tokens end at once. Their models, jobs and results stay with the team."
                      confirm={`Remove ${member.name}`}
                      onConfirm={async () => {
                        await settle(
                          callApi(removeMember, { path: { team, member: member.id } }),
                          `${member.name} is no longer in the team.`,
                        );
                      }}
                    >
                      Remove
                    </ConfirmButton>
                  )}
                </>
              )}
            </span>
          </li>
        ))}
      </ul>
      {members.length === shownAtMost && (
        <p className="text-sm text-soft">The first {shownAtMost} members; the API lists all of them.</p>
      )}

      {mayManage && (
        <section aria-labelledby="invite" className="max-w-2xl">
          <h2 id="invite" className="mb-3 text-lg font-semibold">
            Invite somebody
          </h2>
          <InviteForm team={team} onCall={settle} />
        </section>
      )}
      {mayManage && invitations.length > 0 && (
        <section aria-labelledby="invitations">
          <h2 id="invitations" className="mb-2 text-lg font-semibold">
            Open invitations
          </h2>
          <ul className="border-t border-ink">
            {invitations.map((invitation) => (
              <li
                key={invitation.id}
                className="flex flex-wrap items-center justify-between gap-x-6 gap-y-2 border-b border-rule py-3"
              >
                <span className="min-w-0">
                  <b className="block font-semibold [overflow-wrap:anywhere]">{invitation.email}</b>
                  <span className="block text-sm text-soft">
                    {roleNames(invitation.roles)} ·{' '}
                    {invitation.expired ? <span className="text-methyl">expired</span> : 'valid until'}{' '}
                    <Moment time={invitation.expiresAt} timeZone={timeZone} dayOnly />
                  </span>
                </span>
                <span className="flex flex-wrap gap-2">
                  <Button
                    size="small"
                    aria-label={`Send the invitation to ${invitation.email} again`}
                    onClick={() =>
                      void settle(
                        callApi(resendInvitation, { path: { team, invitation: invitation.id } }),
                        `The invitation is on its way to ${invitation.email} again; the old link has ended.`,
                      )
                    }
                  >
                    Send again
                  </Button>
                  <Button
                    size="small"
                    variant="quiet"
                    aria-label={`Withdraw the invitation to ${invitation.email}`}
                    onClick={() =>
                      void settle(
                        callApi(revokeInvitation, { path: { team, invitation: invitation.id } }),
                        `The invitation to ${invitation.email} has been withdrawn.`,
                      )
                    }
                  >
                    Withdraw
                  </Button>
                </span>
              </li>
            ))}
          </ul>
        </section>
      )}
      {edited && (
        <RolesDialog
          member={edited}
          onClose={() => setEdited(null)}
          onSave={async (roles) => {
            await settle(
              callApi(changeMember, { path: { team, member: edited.id }, body: { roles } }),
              `${edited.name} is now: ${roleNames(roles)}.`,
            );
            setEdited(null);
          }}
        />
      )}
    </div>
  );
}

function RolesDialog({
  member,
  onClose,
  onSave,
}: {
  member: Member;
  onClose: () => void;
  onSave: (roles: Role[]) => Promise<void>;
}) {
  const [roles, setRoles] = useState<Role[]>(member.roles);
  const [pending, setPending] = useState(false);
  return (
    <Dialog
      open
      onClose={onClose}
      title={`Roles of ${member.name}`}
      actions={
        <>
          <Button onClick={onClose}>Keep as they are</Button>
          <Button
            variant="primary"
            pending={pending}
            disabled={roles.length === 0}
            onClick={() => {
              setPending(true);
              void onSave(roles).finally(() => setPending(false));
            }}
          >
            Set roles
          </Button>
        </>
      }
    >
      <RoleChoice roles={roles} onChange={setRoles} />
    </Dialog>
  );
}
