/** SQL that several migrations use to guard money: whole numbers in range, rows that are never changed or removed. */

/** True when `expression` is an integer within ±(2^53 − 1); the driver returns larger ones wrong without a word. */
export const whole = (expression: string): string =>
  `typeof(${expression}) = 'integer' AND ${expression} BETWEEN -9007199254740991 AND 9007199254740991`;

/** Triggers that refuse UPDATE and DELETE. INSERT OR REPLACE meets the second one, since recursive_triggers is on. */
export const appendOnly = (table: string): string[] => [
  `CREATE TRIGGER ${table}AreNotChanged BEFORE UPDATE ON ${table}
   BEGIN SELECT RAISE(ABORT, '${table}: rows are never changed'); END`,
  `CREATE TRIGGER ${table}AreNotRemoved BEFORE DELETE ON ${table}
   BEGIN SELECT RAISE(ABORT, '${table}: rows are never removed'); END`,
];
