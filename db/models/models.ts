/** Rows of models and model versions. */
import type { Sequelize } from 'sequelize';

export function defineNetworkModels(_sequelize: Sequelize): void {}
