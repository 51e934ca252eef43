/** An unexpected console.error or console.warn fails the test that caused it. */
import { afterEach, beforeEach, expect, vi } from 'vitest';

beforeEach(() => {
  vi.spyOn(console, 'error');
  vi.spyOn(console, 'warn');
});
afterEach(() => {
  const calls = [...vi.mocked(console.error).mock.calls, ...vi.mocked(console.warn).mock.calls];
  vi.restoreAllMocks();
  expect(calls).toEqual([]);
});
