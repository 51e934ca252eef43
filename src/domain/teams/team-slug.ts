/** Makes the word that stands for a team in URLs out of its name. */

/** Words that would read as something else in a URL. */
const reserved = new Set(['api', 'new', 'account', 'admin', 'operate', 'teams', 'burette', 'www', 'support']);

/** Lower-case letters, figures and single dashes, at most 40 characters; `taken` decides which number is appended. */
export function teamSlug(name: string, taken: (slug: string) => boolean): string {
  const words = name
    .normalize('NFKD')
    .replaceAll(/\p{M}/gu, '')
    .toLowerCase()
    .replaceAll(/[^a-z0-9]+/g, '-')
    .slice(0, 40)
    .replaceAll(/^-+|-+$/g, '');
  const base = words === '' || reserved.has(words) ? `team${words === '' ? '' : '-' + words}` : words;
  let slug = base;
  for (let number = 2; taken(slug); number++) slug = `${base}-${number}`;
  return slug;
}
