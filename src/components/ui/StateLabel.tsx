/** A state in one word, with a shape and a colour that say the same. */

export type StateTone = 'waiting' | 'working' | 'done' | 'caution' | 'failed' | 'over';

const shapes: Record<StateTone, { ink: string; drawing: React.ReactNode }> = {
  waiting: {
    ink: 'text-soft',
    drawing: <circle cx="6" cy="6" r="4.5" fill="none" stroke="currentColor" strokeWidth="1.6" />,
  },
  working: {
    ink: 'text-bromo',
    drawing: (
      <path
        d="M6 1a5 5 0 0 1 0 10z M6 1a5 5 0 0 0 0 10"
        fill="currentColor"
        fillRule="evenodd"
        stroke="currentColor"
        strokeWidth="1"
        fillOpacity="0.55"
      />
    ),
  },
  done: {
    ink: 'text-malachite',
    drawing: <path d="M1.5 6.5 4.8 10 10.5 2.5" fill="none" stroke="currentColor" strokeWidth="2.2" />,
  },
  caution: { ink: 'text-methyl', drawing: <path d="M6 1 11.5 11H.5z" fill="currentColor" /> },
  failed: { ink: 'text-congo', drawing: <path d="M2 2l8 8M10 2l-8 8" stroke="currentColor" strokeWidth="2.4" /> },
  over: { ink: 'text-soft', drawing: <path d="M2 6h8" stroke="currentColor" strokeWidth="2.2" /> },
};

export function StateLabel({ tone, children }: { tone: StateTone; children: React.ReactNode }) {
  const { ink, drawing } = shapes[tone];
  return (
    <span className={`inline-flex items-center gap-1.5 whitespace-nowrap font-medium ${ink}`}>
      <svg viewBox="0 0 12 12" className="h-3 w-3 shrink-0" aria-hidden="true">
        {drawing}
      </svg>
      {children}
    </span>
  );
}

/** Words and tones of a job's states, the same on every page. */
export const jobStates = {
  queued: { tone: 'waiting', words: 'Queued' },
  running: { tone: 'working', words: 'Running' },
  done: { tone: 'done', words: 'Done' },
  stopped_at_cap: { tone: 'caution', words: 'Stopped at cap' },
  cancelled: { tone: 'over', words: 'Cancelled' },
  failed: { tone: 'failed', words: 'Failed' },
} as const satisfies Record<string, { tone: StateTone; words: string }>;

export function JobStateLabel({ state }: { state: keyof typeof jobStates }) {
  return <StateLabel tone={jobStates[state].tone}>{jobStates[state].words}</StateLabel>;
}
