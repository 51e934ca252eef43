/** The mark: the foot of a burette, its level in pink and one counted drop. */
export function Mark({ className = 'h-7 w-7' }: { className?: string }) {
  return (
    <svg viewBox="0 0 32 32" className={className} aria-hidden="true" fill="none">
      <path className="fill-liquid" d="M11 11h10v8l-3 3h-4l-3-3z" />
      <path
        className="stroke-ink"
        d="M11 2v17l3.5 3.5V25M21 2v17l-3.5 3.5V25M21 6h-4M21 15h-4"
        strokeWidth="1.8"
        strokeLinejoin="round"
      />
      <path className="stroke-phenol" d="M8 11h3q5 3 10 0h3" strokeWidth="2.2" />
      <path className="fill-phenol" d="M16 25.6c1.5 2 2.2 2.9 2.2 3.9a2.2 2.2 0 0 1-4.4 0c0-1 .7-1.9 2.2-3.9z" />
    </svg>
  );
}
