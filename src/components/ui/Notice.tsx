/** A message that stays on the page: what happened, what was kept, what to do next. */
import { CircleAlert, CircleCheck, Info, TriangleAlert } from 'lucide-react';
import type { ReactNode } from 'react';
import type { ProblemDocument } from '@/contracts/errors.ts';

export type Tone = 'information' | 'done' | 'caution' | 'failure';

const tones = {
  information: { icon: Info, edge: 'border-bromo', ink: 'text-bromo' },
  done: { icon: CircleCheck, edge: 'border-malachite', ink: 'text-malachite' },
  caution: { icon: TriangleAlert, edge: 'border-methyl', ink: 'text-methyl' },
  failure: { icon: CircleAlert, edge: 'border-congo', ink: 'text-congo' },
} as const;

/** Failures interrupt a screen reader (`alert`); the rest wait their turn (`status`). `still` is for text that was there from the start. */
export function Notice({
  tone = 'information',
  title,
  children,
  action,
  still = false,
  className = '',
}: {
  tone?: Tone;
  title?: ReactNode;
  children?: ReactNode;
  action?: ReactNode;
  still?: boolean;
  className?: string;
}) {
  const { icon: Icon, edge, ink } = tones[tone];
  return (
    <div
      role={still ? undefined : tone === 'failure' ? 'alert' : 'status'}
      className={`flex gap-3 border-l-4 bg-panel px-4 py-3 text-sm ${edge} ${className}`}
    >
      <Icon aria-hidden="true" className={`mt-0.5 h-[1.125rem] w-[1.125rem] shrink-0 ${ink}`} />
      <div className="min-w-0 grow">
        {title && <p className="font-semibold">{title}</p>}
        {children && <div className="[overflow-wrap:anywhere]">{children}</div>}
        {action && <div className="mt-2 flex flex-wrap gap-2">{action}</div>}
      </div>
    </div>
  );
}

/** A problem document of the API, in words; the request id is for support. */
export function ProblemNotice({
  problem,
  action,
  className,
}: {
  problem: Pick<ProblemDocument, 'title' | 'detail' | 'errors' | 'requestId'>;
  action?: ReactNode;
  className?: string;
}) {
  return (
    <Notice tone="failure" title={problem.title} action={action} {...(className ? { className } : {})}>
      <p>{problem.detail}</p>
      {problem.errors && problem.errors.length > 0 && (
        <ul className="mt-1 list-disc pl-5">
          {problem.errors.slice(0, 8).map((fault) => (
            <li key={`${fault.path} ${fault.message}`}>
              {fault.path && <b className="font-semibold">{fault.path}: </b>}
              {fault.message}
            </li>
          ))}
        </ul>
      )}
      {problem.requestId && <p className="mt-1 text-xs text-soft">Request {problem.requestId}</p>}
    </Notice>
  );
}
