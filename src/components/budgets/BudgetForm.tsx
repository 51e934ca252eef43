/** Monthly budgets and the balance at which a mail goes out, in credits; empty means none. */
import { useState } from 'react';
import { callApi } from '@/components/api/call-api.ts';
import { Button } from '@/components/ui/Button.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { Notice, ProblemNotice } from '@/components/ui/Notice.tsx';
import { WhenLive } from '@/components/ui/WhenLive.tsx';
import { exactCreditsText } from '@/components/ui/amounts-text.ts';
import { setBudgets, type BudgetsDocument } from '@/contracts/budgets.ts';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { creditsField, parseCredits } from './credits-field.ts';

export interface BudgetFormProps {
  team: string;
  initial: BudgetsDocument;
  mayChange: boolean;
}

export function BudgetForm({ team, initial, mayChange }: BudgetFormProps) {
  const [budgets, setStored] = useState(initial);
  const [monthly, setMonthly] = useState(creditsField(initial.monthlyMicrocredits));
  const [low, setLow] = useState(creditsField(initial.lowBalanceMicrocredits));
  const [codes, setCodes] = useState<Record<string, string>>(
    Object.fromEntries(
      initial.projectCodes.map(({ id, monthlyMicrocredits }) => [id, creditsField(monthlyMicrocredits)]),
    ),
  );
  const [state, setState] = useState<'idle' | 'saving' | 'saved'>('idle');
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [checked, setChecked] = useState(false);
  const listed = budgets.projectCodes.filter(
    ({ closed, monthlyMicrocredits }) => !closed || monthlyMicrocredits !== null,
  );
  const fault = (text: string): string | undefined =>
    checked && !parseCredits(text).ok ? 'A number of credits above 0, or nothing.' : undefined;
  const change = (set: (text: string) => void) => (event: { target: { value: string } }) => {
    setState('idle');
    set(event.target.value);
  };

  async function save(): Promise<void> {
    setChecked(true);
    const parsed = [monthly, low, ...listed.map(({ id }) => codes[id] ?? '')].map(parseCredits);
    if (parsed.some(({ ok }) => !ok)) return;
    const [team_, lowest, ...rest] = parsed.map((each) => (each.ok ? each.microcredits : null));
    setState('saving');
    const called = await callApi(setBudgets, {
      path: { team },
      body: {
        monthlyMicrocredits: team_ ?? null,
        lowBalanceMicrocredits: lowest ?? null,
        projectCodes: listed.map(({ id }, index) => ({ id, monthlyMicrocredits: rest[index] ?? null })),
      },
    });
    setProblem(called.ok ? null : called.problem);
    if (called.ok) setStored(called.value.budgets);
    setState(called.ok ? 'saved' : 'idle');
  }

  return (
    <WhenLive>
      <form
        className="flex max-w-2xl flex-col gap-6"
        noValidate
        onSubmit={(event) => {
          event.preventDefault();
          if (state !== 'saving') void save();
        }}
      >
        <div className="grid gap-5 sm:grid-cols-2">
          <TextField
            label="Budget of the team per month"
            hint="Empty: no limit but the credits themselves. A launch beyond it is refused before it starts."
            unit="credits"
            inputMode="decimal"
            value={monthly}
            disabled={!mayChange}
            error={fault(monthly)}
            onChange={change(setMonthly)}
          />
          <TextField
            label="Tell us when less is available than"
            hint="By e-mail to owners and finance admins, once a month. Empty: no mail."
            unit="credits"
            inputMode="decimal"
            value={low}
            disabled={!mayChange}
            error={fault(low)}
            onChange={change(setLow)}
          />
        </div>
        {listed.length > 0 && (
          <fieldset>
            <legend className="mb-2 font-semibold">Budgets of project codes per month</legend>
            <ul className="border-t border-rule">
              {listed.map(({ id, code, client, usedMicrocredits }) => (
                <li
                  key={id}
                  className="grid items-center gap-x-4 gap-y-1 border-b border-rule py-2 sm:grid-cols-[1fr_12rem]"
                >
                  <span className="min-w-0 [overflow-wrap:anywhere]">
                    <span className="font-medium">{code}</span>
                    {client && <span className="text-soft"> {client}</span>}
                    <span className="block text-xs text-soft">
                      {exactCreditsText(usedMicrocredits)} used this month
                    </span>
                  </span>
                  <TextField
                    label={`Budget of ${code}`}
                    labelHidden
                    placeholder="none"
                    unit="credits"
                    inputMode="decimal"
                    value={codes[id] ?? ''}
                    disabled={!mayChange}
                    error={fault(codes[id] ?? '')}
                    onChange={change((text) => setCodes((present) => ({ ...present, [id]: text })))}
                  />
                </li>
              ))}
            </ul>
          </fieldset>
        )}
        {problem && <ProblemNotice problem={problem} />}
        {state === 'saved' && <Notice tone="done">Saved. The next launch meets these budgets.</Notice>}
        {mayChange ? (
          <div>
            <Button type="submit" variant="primary" pending={state === 'saving'}>
              Save the budgets
            </Button>
          </div>
        ) : (
          <p className="text-sm text-soft">Owners and finance admins change budgets.</p>
        )}
      </form>
    </WhenLive>
  );
}
