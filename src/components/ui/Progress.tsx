/** Something slow is going on: a spinner, a line of words with one, a bar with known extent. */

export function Spinner({ className = 'h-4 w-4' }: { className?: string }) {
  return (
    <svg viewBox="0 0 16 16" className={`${className} animate-spin`} aria-hidden="true" fill="none">
      <circle cx="8" cy="8" r="6.5" stroke="currentColor" strokeOpacity="0.25" strokeWidth="2" />
      <path d="M8 1.5a6.5 6.5 0 0 1 6.5 6.5" stroke="currentColor" strokeWidth="2" strokeLinecap="round" />
    </svg>
  );
}

/** Announced politely when it appears. */
export function Waiting({ children = 'Loading' }: { children?: React.ReactNode }) {
  return (
    <p role="status" className="flex items-center gap-2 py-3 text-sm text-soft">
      <Spinner /> {children}
    </p>
  );
}

export function ProgressBar({ value, max, label }: { value: number; max: number; label: string }) {
  const percent = max > 0 ? Math.min(100, Math.max(0, (100 * value) / max)) : 0;
  return (
    <div role="progressbar" aria-label={label} aria-valuemin={0} aria-valuemax={max} aria-valuenow={value}>
      <svg className="block h-2 w-full" aria-hidden="true">
        <rect width="100%" height="100%" className="fill-glass" />
        <rect width={`${percent}%`} height="100%" className="fill-bromo" />
      </svg>
    </div>
  );
}
