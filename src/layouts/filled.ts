/** The fields of a filter form that were filled in: an empty one is no filter. */
export const filled = (search: URLSearchParams): Record<string, string> =>
  Object.fromEntries([...search].map(([name, value]) => [name, value.trim()]).filter(([, value]) => value !== ''));
