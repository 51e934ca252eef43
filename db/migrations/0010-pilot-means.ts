/** What pilots found at the horizon, for the side-by-side of methods. */
import type { Migration } from '../migrate.ts';

export const pilotMeans: Migration = {
  name: '0010-pilot-means',
  statements: [`ALTER TABLE pilots ADD COLUMN atHorizon TEXT CHECK (atHorizon IS NULL OR json_valid(atHorizon))`],
};
