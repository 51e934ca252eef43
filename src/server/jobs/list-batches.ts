/** The plan of a job as a strip of cells: neighbouring batches grouped, each cell as far as its slowest batch. */
import { Batch } from '@db/models/jobs.ts';
import { batchCellStates } from '@/contracts/jobs.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { batchesOut } from './batches-out.ts';
import { findJob } from './find-job.ts';

type CellState = (typeof batchCellStates)[number];

export interface BatchCell {
  firstReplicate: number;
  replicates: number;
  state: CellState;
  batches: number;
  events: number;
  seconds: number;
}

export async function listBatches(options: {
  actor: Actor;
  team: string;
  job: string;
  cells: number;
}): Promise<Result<{ batches: number; cells: BatchCell[] }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:read' });
  if (!authorised.ok) return authorised;
  const found = await findJob({ teamId: authorised.value.team.id, job: options.job });
  if (!found.ok) return found;
  const rows = await Batch.findAll({
    where: { jobId: found.value.id },
    attributes: ['id', 'firstReplicate', 'replicateCount', 'state', 'events', 'seconds'],
    order: [['ordinal', 'ASC']],
    raw: true,
  });
  const out = batchesOut(found.value.id);
  const perCell = Math.max(1, Math.ceil(rows.length / options.cells));
  const cells: BatchCell[] = [];
  for (let start = 0; start < rows.length; start += perCell)
    cells.push(cellOf(rows.slice(start, start + perCell), out));
  return accept({ batches: rows.length, cells });
}

function cellOf(
  rows: Pick<Batch, 'id' | 'firstReplicate' | 'replicateCount' | 'state' | 'events' | 'seconds'>[],
  out: ReadonlySet<string>,
): BatchCell {
  const states = rows.map(({ id, state }): CellState => {
    if (state === 'planned') return out.has(id) ? 'running' : 'waiting';
    return state === 'done' ? 'computed' : state === 'joined' ? 'delivered' : 'discarded';
  });
  const total = (key: 'replicateCount' | 'events' | 'seconds') => rows.reduce((sum, row) => sum + row[key], 0);
  return {
    firstReplicate: rows[0]!.firstReplicate,
    replicates: total('replicateCount'),
    state: states.includes('running') ? 'running' : batchCellStates.find((state) => states.includes(state))!,
    batches: rows.length,
    events: total('events'),
    seconds: Math.round(total('seconds') * 1000) / 1000,
  };
}
