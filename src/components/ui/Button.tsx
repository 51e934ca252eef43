/** Buttons and links that look like them: one primary action a page, the rest quiet. */
import type { AnchorHTMLAttributes, ButtonHTMLAttributes } from 'react';
import { Spinner } from './Progress.tsx';

export type ButtonVariant = 'primary' | 'secondary' | 'quiet' | 'danger';
export type ButtonSize = 'normal' | 'small';

const shapes: Record<ButtonSize, string> = {
  normal: 'min-h-10 px-4 py-2 text-base',
  small: 'min-h-8 px-3 py-1 text-sm',
};
const looks: Record<ButtonVariant, string> = {
  primary: 'bg-phenol text-on-phenol hover:bg-phenol/90 border border-transparent',
  secondary: 'border border-ink text-ink hover:bg-glass',
  quiet: 'border border-transparent text-ink underline decoration-edge underline-offset-[3px] hover:bg-glass',
  danger: 'border border-congo text-congo hover:bg-congo/10',
};

/** The class names, for links and buttons written in Astro. */
export const buttonClass = (variant: ButtonVariant = 'secondary', size: ButtonSize = 'normal'): string =>
  `inline-flex items-center justify-center gap-2 rounded-sm font-semibold leading-tight text-center
   disabled:cursor-not-allowed disabled:opacity-60 ${shapes[size]} ${looks[variant]}`;

interface Look {
  variant?: ButtonVariant;
  size?: ButtonSize;
}

export interface ButtonProps extends ButtonHTMLAttributes<HTMLButtonElement>, Look {
  /** Shows that the action is under way and ignores further clicks; the words stay. */
  pending?: boolean;
}

/** `type` is "button" unless stated. While `pending` it keeps focus, so that a screen reader is not thrown off. */
export function Button({ variant, size, pending = false, className = '', children, onClick, ...rest }: ButtonProps) {
  return (
    <button
      type="button"
      {...rest}
      aria-disabled={pending || undefined}
      aria-busy={pending || undefined}
      onClick={pending ? (event) => event.preventDefault() : onClick}
      className={`${buttonClass(variant, size)} ${className}`}
    >
      {pending && <Spinner />}
      {children}
    </button>
  );
}

export function ButtonLink({ variant, size, className = '', ...rest }: AnchorHTMLAttributes<HTMLAnchorElement> & Look) {
  return <a {...rest} className={`${buttonClass(variant, size)} ${className}`} />;
}
