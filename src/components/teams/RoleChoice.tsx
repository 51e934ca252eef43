/** Which roles somebody holds: a set, with what each may do. */
import { CheckField } from '@/components/ui/Field.tsx';
import { roles as everyRole, type Role } from '@/domain/teams/permissions.ts';
import { roleWords } from './role-words.ts';

export function RoleChoice({ roles, onChange }: { roles: readonly Role[]; onChange: (roles: Role[]) => void }) {
  const toggle = (role: Role, held: boolean): void =>
    onChange(everyRole.filter((one) => (one === role ? held : roles.includes(one))));
  return (
    <fieldset>
      <legend className="mb-1 text-sm font-medium">Roles</legend>
      <div className="grid gap-x-6 gap-y-2.5 border-t border-rule pt-3 sm:grid-cols-2">
        {everyRole.map((role) => (
          <CheckField
            key={role}
            label={roleWords[role].name}
            hint={roleWords[role].may}
            checked={roles.includes(role)}
            onChange={(event) => toggle(role, event.target.checked)}
          />
        ))}
      </div>
    </fieldset>
  );
}
