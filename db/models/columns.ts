/** The few column kinds that our models use. Times are RFC 3339 UTC text; structured values are JSON text. */
import { DataTypes, type Model, type ModelAttributeColumnOptions } from 'sequelize';

export const column = {
  id: (): ModelAttributeColumnOptions => ({ type: DataTypes.TEXT, primaryKey: true, allowNull: false }),
  text: (): ModelAttributeColumnOptions => ({ type: DataTypes.TEXT, allowNull: false }),
  optionalText: (): ModelAttributeColumnOptions => ({ type: DataTypes.TEXT, allowNull: true }),
  /** An integer within ±(2^53 − 1); the migration's CHECK holds the range. */
  integer: (): ModelAttributeColumnOptions => ({ type: DataTypes.BIGINT, allowNull: false }),
  optionalInteger: (): ModelAttributeColumnOptions => ({ type: DataTypes.BIGINT, allowNull: true }),
  real: (): ModelAttributeColumnOptions => ({ type: DataTypes.DOUBLE, allowNull: false }),
  boolean: (): ModelAttributeColumnOptions => ({ type: DataTypes.BOOLEAN, allowNull: false, defaultValue: false }),
  json: <T>(name: string): ModelAttributeColumnOptions<Model> => jsonColumn<T>(name, false),
  optionalJson: <T>(name: string): ModelAttributeColumnOptions<Model> => jsonColumn<T>(name, true),
};

function jsonColumn<T>(name: string, allowNull: boolean): ModelAttributeColumnOptions<Model> {
  return {
    type: DataTypes.TEXT,
    allowNull,
    get(this: Model): T | null {
      const text = this.getDataValue(name) as string | null;
      return text === null || text === undefined ? null : (JSON.parse(text) as T);
    },
    set(this: Model, value: unknown) {
      this.setDataValue(name, value === null ? null : JSON.stringify(value));
    },
  };
}
