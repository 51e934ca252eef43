/** Reads the form encoding of the service's API: `metadata[a]=1&line_items[0][quantity]=2` into nested objects. */

export type Form = { [name: string]: string | Form };

export function readForm(text: string): Form {
  const form: Form = {};
  for (const [name, value] of new URLSearchParams(text)) {
    const path = name.split('[').map((part) => part.replace(/\]$/, ''));
    let place = form;
    for (const step of path.slice(0, -1)) {
      const next = place[step];
      place = typeof next === 'object' ? next : ((place[step] = Object.create(null) as Form) as Form);
    }
    place[path.at(-1) ?? name] = value;
  }
  return form;
}

/** A field as text; undefined when absent or nested. */
export const textOf = (form: Form, name: string): string | undefined => {
  const value = form[name];
  return typeof value === 'string' && value !== '' ? value : undefined;
};

export const formOf = (form: Form, name: string): Form | undefined => {
  const value = form[name];
  return typeof value === 'object' ? value : undefined;
};

/** `metadata[…]` as a flat record. */
export const metadataOf = (form: Form): Record<string, string> =>
  Object.fromEntries(
    Object.entries(formOf(form, 'metadata') ?? {}).filter(
      (entry): entry is [string, string] => typeof entry[1] === 'string',
    ),
  );
