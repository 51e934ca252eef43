/** For commands: a refusal of something that cannot be refused is a bug, thrown with its own words. */
import type { Result } from '@/domain/refusals.ts';

export function must<T>(result: Result<T>): T {
  if (result.ok) return result.value;
  const faults = result.errors?.map(({ path, message }) => `\n  ${path}: ${message}`).join('') ?? '';
  throw new Error(`${result.code}: ${result.detail}${faults}`);
}
