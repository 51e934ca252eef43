/** An empty list: what will stand here, and the next step. The picture is an empty tube with its scale. */
import type { ReactNode } from 'react';

export function EmptyState({ title, children, action }: { title: string; children?: ReactNode; action?: ReactNode }) {
  return (
    <div className="flex gap-6 border-b border-rule py-6 sm:gap-8">
      <svg viewBox="0 0 30 108" className="h-28 w-8 shrink-0" fill="none" aria-hidden="true">
        <path d="M6 1v84q0 6 6 8v12h6V93q6-2 6-8V1" className="fill-panel stroke-edge" strokeWidth="1.5" />
        {Array.from({ length: 15 }, (_, mark) => (
          <path key={mark} d={`M24 ${8 + mark * 5.4}h-${mark % 5 === 0 ? 9 : 4.5}`} className="stroke-edge" />
        ))}
      </svg>
      <div className="max-w-prose self-center">
        <h2 className="text-lg font-semibold">{title}</h2>
        {children && <div className="mt-1 text-soft">{children}</div>}
        {action && <div className="mt-4 flex flex-wrap gap-2">{action}</div>}
      </div>
    </div>
  );
}
