/** Project codes: where the cost of jobs is booked. Open ones can be chosen at launch; closed ones keep their jobs. */
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useRef, useState } from 'react';
import type { z } from 'zod';
import { callApi } from '@/components/api/call-api.ts';
import { intentKey } from '@/components/api/intent-key.ts';
import { Moment } from '@/components/ui/Amounts.tsx';
import { Button } from '@/components/ui/Button.tsx';
import { EmptyState } from '@/components/ui/EmptyState.tsx';
import { TextField } from '@/components/ui/Field.tsx';
import { ProblemNotice } from '@/components/ui/Notice.tsx';
import { QueryProvider } from '@/components/ui/QueryProvider.tsx';
import { StateLabel } from '@/components/ui/StateLabel.tsx';
import { Table } from '@/components/ui/Table.tsx';
import type { ProblemDocument } from '@/contracts/errors.ts';
import { changeProjectCode, createProjectCode, listProjectCodes, type projectCodeDocument } from '@/contracts/teams.ts';
import { WhenLive } from '@/components/ui/WhenLive.tsx';

export type ProjectCode = z.output<typeof projectCodeDocument>;

export interface ProjectCodesProps {
  team: string;
  timeZone: string;
  mayChange: boolean;
  initial: ProjectCode[];
}

const shownAtMost = 200;

export function ProjectCodes(props: ProjectCodesProps) {
  return (
    <QueryProvider>
      <List {...props} />
    </QueryProvider>
  );
}

function List({ team, timeZone, mayChange, initial }: ProjectCodesProps) {
  const queries = useQueryClient();
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const refresh = (): Promise<void> => queries.invalidateQueries({ queryKey: ['project-codes', team] });
  const codes = useQuery({
    queryKey: ['project-codes', team],
    initialData: initial,
    queryFn: async () => {
      const called = await callApi(listProjectCodes, { path: { team }, query: { limit: shownAtMost } });
      if (!called.ok) throw new Error(called.problem.detail);
      return called.value.projectCodes;
    },
  }).data;

  async function setClosed(code: ProjectCode, closed: boolean): Promise<void> {
    const called = await callApi(changeProjectCode, { path: { team, projectCode: code.id }, body: { closed } });
    setProblem(called.ok ? null : called.problem);
    await refresh();
  }

  return (
    <div className="flex flex-col gap-10">
      {problem && <ProblemNotice problem={problem} />}
      {codes.length === 0 ? (
        <EmptyState title="No project codes yet">
          <p>
            A code ties jobs to a client, a grant or a purchase order, so that spend can be booked where it belongs.
            {mayChange ? ' Create the first one below.' : ' An owner or finance admin creates them.'}
          </p>
        </EmptyState>
      ) : (
        <Table
          caption="Project codes"
          rows={codes}
          rowKey={(code) => code.id}
          columns={[
            { id: 'code', title: 'Code', cell: (code) => <b className="font-semibold">{code.code}</b> },
            { id: 'client', title: 'Client', cell: (code) => code.client ?? '–' },
            { id: 'po', title: 'PO number', cell: (code) => code.poNumber ?? '–' },
            {
              id: 'state',
              title: 'State',
              cell: (code) =>
                code.closedAt ? (
                  <StateLabel tone="over">
                    Closed <Moment time={code.closedAt} timeZone={timeZone} dayOnly />
                  </StateLabel>
                ) : (
                  <StateLabel tone="done">Open</StateLabel>
                ),
            },
            ...(mayChange
              ? [
                  {
                    id: 'act',
                    title: <span className="sr-only">Act</span>,
                    figure: true,
                    cell: (code: ProjectCode) => (
                      <Button
                        size="small"
                        aria-label={`${code.closedAt ? 'Reopen' : 'Close'} ${code.code}`}
                        onClick={() => void setClosed(code, !code.closedAt)}
                      >
                        {code.closedAt ? 'Reopen' : 'Close'}
                      </Button>
                    ),
                  },
                ]
              : []),
          ]}
        />
      )}
      {mayChange && (
        <section aria-labelledby="new-code">
          <h2 id="new-code" className="mb-3 text-lg font-semibold">
            New project code
          </h2>
          <NewCode team={team} onCreated={refresh} />
        </section>
      )}
    </div>
  );
}

const blank = { code: '', client: '', poNumber: '' };

function NewCode({ team, onCreated }: { team: string; onCreated: () => Promise<void> }) {
  const [fields, setFields] = useState(blank);
  const [problem, setProblem] = useState<ProblemDocument | null>(null);
  const [pending, setPending] = useState(false);
  const key = useRef(intentKey());
  const set = (name: keyof typeof blank) => (event: { target: { value: string } }) =>
    setFields((present) => ({ ...present, [name]: event.target.value }));
  const fault = (path: string): string | undefined => problem?.errors?.find((one) => one.path === path)?.message;

  async function create(): Promise<void> {
    setPending(true);
    const { code, client, poNumber } = fields;
    const called = await callApi(createProjectCode, {
      path: { team },
      body: { code, ...(client ? { client } : {}), ...(poNumber ? { poNumber } : {}) },
      idempotencyKey: key.current,
    });
    key.current = intentKey();
    setProblem(called.ok ? null : called.problem);
    if (called.ok) {
      setFields(blank);
      await onCreated();
    }
    setPending(false);
  }

  return (
    <WhenLive>
      <form
        className="flex max-w-3xl flex-col gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          if (!pending) void create();
        }}
      >
        <div className="grid gap-4 sm:grid-cols-3">
          <TextField label="Code" required value={fields.code} onChange={set('code')} error={fault('code')} />
          <TextField label="Client (optional)" value={fields.client} onChange={set('client')} error={fault('client')} />
          <TextField
            label="PO number (optional)"
            value={fields.poNumber}
            onChange={set('poNumber')}
            error={fault('poNumber')}
          />
        </div>
        {problem && !problem.errors?.length && <ProblemNotice problem={problem} />}
        <div>
          <Button type="submit" variant="primary" pending={pending}>
            Create the code
          </Button>
        </div>
      </form>
    </WhenLive>
  );
}
