/** Short ways to state a problem, and the cut that keeps a list of them readable. */
import type { Problem } from './document.ts';

const stated =
  (severity: Problem['severity']) =>
  (path: string, code: string, message: string): Problem => ({ severity, path, code, message });

export const error = stated('error');
export const warning = stated('warning');
export const information = stated('information');

export const isError = (problem: Problem): boolean => problem.severity === 'error';

/** More than this many of one severity help nobody. */
const shown = 200;

/** Errors first, then warnings, then information, each in order found and cut after 200 with a line that says how many more there are. */
export function orderedProblems(problems: Problem[]): Problem[] {
  return (['error', 'warning', 'information'] as const).flatMap((severity) => {
    const own = problems.filter((problem) => problem.severity === severity);
    if (own.length <= shown) return own;
    const message = `${own.length - shown} more of this kind are not listed; mend these first.`;
    return [...own.slice(0, shown), { severity, path: '', code: 'more_problems', message }];
  });
}
