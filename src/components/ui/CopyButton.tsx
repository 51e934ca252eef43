/** Copies a text and says that it did. */
import { Check, Copy } from 'lucide-react';
import { useState } from 'react';
import { Button } from './Button.tsx';

export function CopyButton({ text, children = 'Copy' }: { text: string; children?: React.ReactNode }) {
  const [state, setState] = useState<'idle' | 'copied' | 'refused'>('idle');
  async function copy(): Promise<void> {
    try {
      await navigator.clipboard.writeText(text);
      setState('copied');
    } catch {
      setState('refused');
    }
  }
  return (
    <Button size="small" onClick={() => void copy()}>
      {state === 'copied' ? (
        <Check aria-hidden="true" className="h-4 w-4" />
      ) : (
        <Copy aria-hidden="true" className="h-4 w-4" />
      )}
      <span aria-live="polite">
        {state === 'copied' ? 'Copied' : state === 'refused' ? 'Select the text and copy it' : children}
      </span>
    </Button>
  );
}
