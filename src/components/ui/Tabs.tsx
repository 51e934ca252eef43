/** Tabs as in the authoring practices of WAI-ARIA: arrows, Home and End move, the panel follows. */
import { useId, useRef, type KeyboardEvent, type ReactNode } from 'react';

export interface Tab {
  id: string;
  label: ReactNode;
  content: ReactNode;
}

/** Only the chosen panel is mounted. The owner keeps the choice, so that it can stand in the URL. */
export function Tabs({
  label,
  tabs,
  chosen,
  onChoose,
}: {
  label: string;
  tabs: readonly Tab[];
  chosen: string;
  onChoose: (id: string) => void;
}) {
  const prefix = useId();
  const list = useRef<HTMLDivElement>(null);
  const at = Math.max(
    0,
    tabs.findIndex((tab) => tab.id === chosen),
  );
  const current = tabs[at];

  function move(event: KeyboardEvent): void {
    const last = tabs.length - 1;
    const steps: Record<string, number> = {
      ArrowRight: at === last ? 0 : at + 1,
      ArrowLeft: at === 0 ? last : at - 1,
      Home: 0,
      End: last,
    };
    const next = steps[event.key];
    if (next === undefined) return;
    event.preventDefault();
    onChoose(tabs[next]!.id);
    list.current?.querySelectorAll<HTMLElement>('[role=tab]')[next]?.focus();
  }

  return (
    <div>
      <div
        ref={list}
        role="tablist"
        aria-label={label}
        onKeyDown={move}
        className="flex gap-5 overflow-x-auto border-b border-rule"
      >
        {tabs.map((tab, index) => (
          <button
            key={tab.id}
            type="button"
            role="tab"
            id={`${prefix}-${tab.id}-tab`}
            aria-selected={index === at}
            aria-controls={index === at ? `${prefix}-${tab.id}` : undefined}
            tabIndex={index === at ? 0 : -1}
            onClick={() => onChoose(tab.id)}
            className={`-mb-px min-h-10 shrink-0 border-b-2 text-base focus-visible:outline-offset-[-2px] ${
              index === at ? 'border-ink font-semibold' : 'border-transparent text-soft hover:text-ink'
            }`}
          >
            {tab.label}
          </button>
        ))}
      </div>
      {current && (
        <div
          role="tabpanel"
          id={`${prefix}-${current.id}`}
          aria-labelledby={`${prefix}-${current.id}-tab`}
          tabIndex={0}
          className="pt-4"
        >
          {current.content}
        </div>
      )}
    </div>
  );
}
