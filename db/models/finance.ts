/** Rows of budgets, alerts, messages about invoices and operators' acts. */
import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';
import { column } from './columns.ts';

type Attributes<M extends Model> = InferAttributes<M>;
type Creation<M extends Model> = InferCreationAttributes<M>;

export class TeamBudget extends Model<Attributes<TeamBudget>, Creation<TeamBudget>> {
  declare teamId: string;
  /** Null: no limit. */
  declare monthlyMicrocredits: number | null;
  /** Null: no mail. */
  declare lowBalanceMicrocredits: number | null;
  declare updatedAt: string;
  declare updatedBy: string | null;
}

export class ProjectCodeBudget extends Model<Attributes<ProjectCodeBudget>, Creation<ProjectCodeBudget>> {
  declare projectCodeId: string;
  declare monthlyMicrocredits: number | null;
  declare updatedAt: string;
  declare updatedBy: string | null;
}

/** Says that an alert of a month has gone out. */
export class BudgetAlert extends Model<Attributes<BudgetAlert>, Creation<BudgetAlert>> {
  declare teamId: string;
  declare month: string;
  declare alert: string;
  declare at: string;
}

export class InvoiceMessage extends Model<Attributes<InvoiceMessage>, Creation<InvoiceMessage>> {
  declare id: string;
  declare invoiceId: string;
  declare side: 'team' | 'operator';
  declare userId: string | null;
  declare body: string;
  declare at: string;
}

export class OperatorAct extends Model<Attributes<OperatorAct>, Creation<OperatorAct>> {
  declare id: string;
  declare at: string;
  declare userId: string | null;
  declare act: string;
  declare teamId: string | null;
  declare subjectId: string | null;
  declare details: Record<string, unknown>;
}

export function defineFinance(sequelize: Sequelize): void {
  const table = (tableName: string) => ({ sequelize, tableName, timestamps: false });
  const primary = { primaryKey: true };
  TeamBudget.init(
    {
      teamId: column.id(),
      monthlyMicrocredits: column.optionalInteger(),
      lowBalanceMicrocredits: column.optionalInteger(),
      updatedAt: column.text(),
      updatedBy: column.optionalText(),
    },
    table('teamBudgets'),
  );
  ProjectCodeBudget.init(
    {
      projectCodeId: column.id(),
      monthlyMicrocredits: column.optionalInteger(),
      updatedAt: column.text(),
      updatedBy: column.optionalText(),
    },
    table('projectCodeBudgets'),
  );
  BudgetAlert.init(
    {
      teamId: { ...column.text(), ...primary },
      month: { ...column.text(), ...primary },
      alert: { ...column.text(), ...primary },
      at: column.text(),
    },
    table('budgetAlerts'),
  );
  InvoiceMessage.init(
    {
      id: column.id(),
      invoiceId: column.text(),
      side: column.text(),
      userId: column.optionalText(),
      body: column.text(),
      at: column.text(),
    },
    table('invoiceMessages'),
  );
  OperatorAct.init(
    {
      id: column.id(),
      at: column.text(),
      userId: column.optionalText(),
      act: column.text(),
      teamId: column.optionalText(),
      subjectId: column.optionalText(),
      details: column.json('details'),
    },
    table('operatorActs'),
  );
}
