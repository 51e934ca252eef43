/** Rows of project codes and of the mail outbox. */
import type { Sequelize } from 'sequelize';

export function defineTeams(_sequelize: Sequelize): void {}
