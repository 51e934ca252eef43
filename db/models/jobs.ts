/** Rows of quotes, jobs, charge segments, points and batches. */
import type { Sequelize } from 'sequelize';

export function defineJobs(_sequelize: Sequelize): void {}
