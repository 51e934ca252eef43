/** Form fields: a visible label, a hint, an error tied to the control, and a unit where there is one. */
import {
  useId,
  type InputHTMLAttributes,
  type ReactNode,
  type SelectHTMLAttributes,
  type TextareaHTMLAttributes,
} from 'react';

export interface FieldWords {
  label: ReactNode;
  hint?: ReactNode | undefined;
  /** What is wrong with the value and what would be right. */
  error?: string | undefined;
  /** The label is read but not seen; for a control in a row that explains it. */
  labelHidden?: boolean;
}

export const controlClass =
  'w-full min-h-10 rounded-sm border border-edge bg-panel px-3 py-2 text-[1rem] sm:text-base text-ink ' +
  'placeholder:text-soft disabled:opacity-60 aria-[invalid=true]:border-congo aria-[invalid=true]:border-2';

interface Wiring {
  id: string;
  'aria-describedby': string | undefined;
  'aria-invalid': true | undefined;
}

/** The frame round any control; `children` receives the attributes that tie it to label, hint and error. */
export function Field({
  id,
  label,
  hint,
  error,
  labelHidden = false,
  className = '',
  children,
}: FieldWords & { id?: string | undefined; className?: string; children: (wiring: Wiring) => ReactNode }) {
  const generated = useId();
  const controlId = id ?? generated;
  const described = [hint ? `${controlId}-hint` : '', error ? `${controlId}-error` : ''].filter(Boolean).join(' ');
  return (
    <div className={className}>
      <label htmlFor={controlId} className={labelHidden ? 'sr-only' : 'mb-1 block text-sm font-medium'}>
        {label}
      </label>
      {children({
        id: controlId,
        'aria-describedby': described || undefined,
        'aria-invalid': error ? true : undefined,
      })}
      {hint && (
        <p id={`${controlId}-hint`} className="mt-1 text-xs text-soft">
          {hint}
        </p>
      )}
      {error && (
        <p id={`${controlId}-error`} className="mt-1 text-sm font-medium text-congo">
          <span aria-hidden="true">✕ </span>
          {error}
        </p>
      )}
    </div>
  );
}

type Own<Element> = FieldWords & Omit<Element, keyof FieldWords> & { fieldClassName?: string };

/** A line of text or a number. `unit` is shown inside, at the right. Pass `id` when the page is static. */
export function TextField({
  label,
  hint,
  error,
  labelHidden,
  unit,
  id,
  className = '',
  fieldClassName,
  ...input
}: Own<InputHTMLAttributes<HTMLInputElement>> & { unit?: string }) {
  return (
    <Field {...{ id, label, hint, error, labelHidden, className: fieldClassName }}>
      {(wiring) => (
        <span className="relative block">
          <input {...input} {...wiring} className={`${controlClass} ${unit ? 'pr-20' : ''} ${className}`} />
          {unit && (
            <span className="pointer-events-none absolute inset-y-0 right-3 flex items-center text-sm text-soft">
              {unit}
            </span>
          )}
        </span>
      )}
    </Field>
  );
}

export function TextAreaField({
  label,
  hint,
  error,
  labelHidden,
  id,
  className = '',
  fieldClassName,
  ...input
}: Own<TextareaHTMLAttributes<HTMLTextAreaElement>>) {
  return (
    <Field {...{ id, label, hint, error, labelHidden, className: fieldClassName }}>
      {(wiring) => <textarea rows={3} {...input} {...wiring} className={`${controlClass} ${className}`} />}
    </Field>
  );
}

export interface Choice {
  value: string;
  label: string;
  disabled?: boolean;
}

/** The platform's own list: right on a phone and with a keyboard. */
export function SelectField({
  label,
  hint,
  error,
  labelHidden,
  id,
  choices,
  className = '',
  fieldClassName,
  ...select
}: Own<SelectHTMLAttributes<HTMLSelectElement>> & { choices: readonly Choice[] }) {
  return (
    <Field {...{ id, label, hint, error, labelHidden, className: fieldClassName }}>
      {(wiring) => (
        <select {...select} {...wiring} className={`${controlClass} ${className}`}>
          {choices.map((choice) => (
            <option key={choice.value} value={choice.value} disabled={choice.disabled}>
              {choice.label}
            </option>
          ))}
        </select>
      )}
    </Field>
  );
}

export function CheckField({
  label,
  hint,
  className = '',
  ...input
}: { label: ReactNode; hint?: ReactNode } & InputHTMLAttributes<HTMLInputElement>) {
  return (
    <label className={`flex items-start gap-2.5 text-sm ${className}`}>
      <input type="checkbox" {...input} className="mt-0.5 h-[1.125rem] w-[1.125rem] shrink-0 accent-ink" />
      <span>
        <span className="font-medium">{label}</span>
        {hint && <span className="block text-xs text-soft">{hint}</span>}
      </span>
    </label>
  );
}

/** One of a few, all seen at once. */
export function RadioField({
  legend,
  name,
  value,
  choices,
  onChange,
}: {
  legend: ReactNode;
  name: string;
  value: string;
  choices: readonly (Choice & { hint?: ReactNode })[];
  onChange: (value: string) => void;
}) {
  return (
    <fieldset>
      <legend className="mb-1 text-sm font-medium">{legend}</legend>
      <div className="border-t border-rule">
        {choices.map((choice) => (
          <label key={choice.value} className="flex items-start gap-2.5 border-b border-rule py-2 text-sm">
            <input
              type="radio"
              name={name}
              value={choice.value}
              checked={choice.value === value}
              disabled={choice.disabled}
              onChange={() => onChange(choice.value)}
              className="mt-0.5 h-[1.125rem] w-[1.125rem] shrink-0 accent-ink"
            />
            <span className="flex grow flex-wrap justify-between gap-x-4">
              <span className="font-medium">{choice.label}</span>
              {choice.hint && <span className="text-soft">{choice.hint}</span>}
            </span>
          </label>
        ))}
      </div>
    </fieldset>
  );
}
