/** How the month draws its budget down, and which project codes used it. */
import { drawDownOption, drawDownTable, projectSpendOption, projectSpendTable } from '@/charts/draw-down-option.ts';
import { Figure } from '@/components/charts/Figure.tsx';
import type { BudgetsDocument } from '@/contracts/budgets.ts';

export function BudgetFigures({ budgets }: { budgets: BudgetsDocument }) {
  const some = budgets.projectCodes.some(({ usedMicrocredits }) => usedMicrocredits > 0);
  return (
    <div className="grid gap-10 xl:grid-cols-2">
      <section aria-labelledby="draw-down">
        <h2 id="draw-down" className="mb-2 text-lg font-semibold">
          The month against its budget
        </h2>
        <Figure
          description="Credits spent and held by jobs launched this month, by the day of the launch."
          option={(theme) => drawDownOption(budgets, theme)}
          table={() => drawDownTable(budgets)}
          fileStem={`budget-${budgets.month}`}
        />
      </section>
      {some && (
        <section aria-labelledby="by-code">
          <h2 id="by-code" className="mb-2 text-lg font-semibold">
            By project code
          </h2>
          <Figure
            description="Credits used this month by project code; a mark stands at each code’s own budget."
            option={(theme) => projectSpendOption(budgets.projectCodes, theme)}
            table={() => projectSpendTable(budgets.projectCodes)}
            fileStem={`project-codes-${budgets.month}`}
          />
        </section>
      )}
    </div>
  );
}
