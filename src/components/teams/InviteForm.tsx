/** Invites somebody by e-mail with a set of roles. */
import { useRef, useState } from 'react';
import { callApi, type Called } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { inviteMember } from '@/contracts/teams.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { RoleChoice } from './RoleChoice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

export function InviteForm({
  team,
  onCall,
}: {
  team: string;
  onCall: (call: Promise<Called<unknown>>, words: string) => Promise<boolean>;
}) {
  const [email, setEmail] = useState('');
  const [roles, setRoles] = useState<Role[]>(['modeller']);
  const [pending, setPending] = useState(false);
  const key = useRef(intentKey());

  async function invite(): Promise<void> {
    setPending(true);
    const call = callApi(inviteMember, { path: { team }, body: { email, roles }, idempotencyKey: key.current });
    const invited = await onCall(call, `An invitation is on its way to ${email}.`);
    key.current = intentKey();
    if (invited) setEmail('');
    setPending(false);
  }

  return (
    <WhenLive>
      <form
        className="flex flex-col gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          if (!pending) void invite();
        }}
      >
        <TextField
          label="E-mail"
          type="email"
          required
          autoComplete="off"
          value={email}
          onChange={(event) => setEmail(event.target.value)}
          fieldClassName="max-w-md"
        />
        <RoleChoice roles={roles} onChange={setRoles} />
        <div>
          <Button type="submit" variant="primary" pending={pending} disabled={roles.length === 0}>
            Send the invitation
          </Button>
        </div>
      </form>
    </WhenLive>
  );
}
