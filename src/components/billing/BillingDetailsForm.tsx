/** Who invoices are made out to. Invoices already issued stay as they are. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextAreaField, TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { setBillingDetails, type BillingDetails } from '@/contracts/billing.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

export interface BillingDetailsFormProps {
  team: string;
  initial: BillingDetails | null;
  mayChange: boolean;
}

const blank = { name: '', address: '', country: '', vatNumber: '', email: '' };
type Fields = typeof blank;

const fieldsOf = (details: BillingDetails | null): Fields =>
  details ? { ...details, vatNumber: details.vatNumber ?? '', email: details.email ?? '' } : blank;

export function BillingDetailsForm({ team, initial, mayChange }: BillingDetailsFormProps) {
  const [fields, setFields] = useState(fieldsOf(initial));
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [state, setState] = useState<'idle' | 'saving' | 'saved'>('idle');
  const fault = (path: string): string | undefined => problem?.errors?.find((one) => one.path === path)?.message;
  const bind = (name: keyof Fields) => ({
    name,
    value: fields[name],
    disabled: !mayChange,
    error: fault(name),
    onChange: (event: { target: { value: string } }) => {
      setState('idle');
      setFields((present) => ({ ...present, [name]: event.target.value }));
    },
  });

  async function save(): Promise<void> {
    setState('saving');
    const body = { ...fields, vatNumber: fields.vatNumber.trim() || null, email: fields.email.trim() || null };
    const called = await callApi(setBillingDetails, { path: { team }, body });
    setProblem(called.ok ? null : called.problem);
    if (called.ok) setFields(fieldsOf(called.value.billingDetails));
    setState(called.ok ? 'saved' : 'idle');
  }

  return (
    <WhenLive>
      <form
        className="flex max-w-xl flex-col gap-5"
        onSubmit={(event) => {
          event.preventDefault();
          if (state !== 'saving') void save();
        }}
      >
        <TextField label="Name of the buyer" required autoComplete="organization" {...bind('name')} />
        <TextAreaField
          label="Address"
          hint="Street, town, postcode; up to 6 lines."
          required
          rows={4}
          autoComplete="street-address"
          {...bind('address')}
        />
        <div className="grid gap-5 sm:grid-cols-[9rem_minmax(0,1fr)]">
          <TextField
            label="Country"
            hint="Two letters, such as DE."
            required
            maxLength={2}
            autoComplete="country"
            {...bind('country')}
          />
          <TextField label="VAT number (optional)" hint="With its country’s letters." {...bind('vatNumber')} />
        </div>
        <TextField
          label="E-mail for receipts (optional)"
          hint="Without it, the owners get them."
          type="email"
          autoComplete="email"
          {...bind('email')}
        />
        {problem && !problem.errors?.length && <ProblemNotice problem={problem} />}
        {state === 'saved' && <Notice tone="done">Saved. The next invoice uses these details.</Notice>}
        {mayChange ? (
          <div>
            <Button type="submit" variant="primary" pending={state === 'saving'}>
              Save the details
            </Button>
          </div>
        ) : (
          <p className="text-sm text-soft">Owners and finance admins change these details.</p>
        )}
      </form>
    </WhenLive>
  );
}
