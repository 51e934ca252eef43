/** What of a job SED-ML can say; of a sweep its first point. */
import { overridesAt } from '@/domain/jobs/sweep.ts';
import type { SedmlJob } from '@/formats/sedml/write-sedml.ts';
import type { Ensemble } from './ensemble.ts';
import type { ArchiveSubject } from './subject.ts';

export function sedmlJob({ job, version }: ArchiveSubject, ensemble: Ensemble): SedmlJob {
  const { inputs } = job;
  const overrides = overridesAt(inputs, 0);
  return {
    modelFile: 'model.xml',
    method:
      inputs.method === 'leap'
        ? 'tau-leaping'
        : ensemble.kernel === 'composition-rejection'
          ? 'composition-rejection'
          : 'direct',
    epsilon: inputs.epsilon,
    seed: job.seed,
    horizon: inputs.horizon,
    gridIntervals: inputs.gridIntervals,
    replicates: ensemble.replicates,
    overrides: {
      parameters: overrides.parameters ?? {},
      initialCounts: overrides.initialCounts ?? {},
    },
    species: version.document.species.map(({ id, name }) => ({ id, name: name ?? id })),
  };
}
