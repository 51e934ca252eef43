/** What changed between two versions of a model, row by row. */
import { useQuery } from '@tanstack/react-query';
import { callApi } from '@/components/api/call-api.ts';
import { Dialog } from '@/components/ui/Dialog.tsx';
import { Notice } from '@/components/ui/Notice.tsx';
import { Waiting } from '@/components/ui/Progress.tsx';
import { StateLabel, type StateTone } from '@/components/ui/StateLabel.tsx';
import { readVersion } from '@/contracts/network.ts';
import { differenceOfNetworks, type RowDifference } from '@/domain/network/difference-of-networks.ts';

interface Props {
  team: string;
  model: string;
  /** The earlier and the later version. */
  from: number;
  to: number;
  onClose: () => void;
}

const tones: Record<RowDifference['change'], StateTone> = { added: 'done', removed: 'failed', changed: 'caution' };

export function DifferenceDialog({ team, model, from, to, onClose }: Props) {
  const query = useQuery({
    queryKey: ['difference', team, model, from, to],
    staleTime: Infinity,
    queryFn: async () => {
      const read = (version: number) => callApi(readVersion, { path: { team, model, version: String(version) } });
      const [one, other] = await Promise.all([read(from), read(to)]);
      if (!one.ok) throw new Error(one.problem.detail);
      if (!other.ok) throw new Error(other.problem.detail);
      return differenceOfNetworks(one.value.network, other.value.network);
    },
  });
  return (
    <Dialog open onClose={onClose} title={`From version ${from} to version ${to}`}>
      {query.isPending && <Waiting>Comparing</Waiting>}
      {query.isError && (
        <Notice tone="failure" title="The versions could not be compared">
          {query.error.message}
        </Notice>
      )}
      {query.data?.length === 0 && <p>The two say the same.</p>}
      {query.data && query.data.length > 0 && (
        <ul
          className="max-h-[60vh] overflow-y-auto border-t border-rule text-sm"
          tabIndex={0}
          aria-label={`${query.data.length} differences`}
        >
          {query.data.map((row) => (
            <DifferenceRow key={`${row.kind} ${row.id}`} row={row} />
          ))}
        </ul>
      )}
    </Dialog>
  );
}

function DifferenceRow({ row }: { row: RowDifference }) {
  return (
    <li className="border-b border-rule py-2">
      <span className="flex flex-wrap justify-between gap-x-3">
        <b className="font-semibold [overflow-wrap:anywhere]">
          {row.kind === 'network' ? 'Model' : `${row.kind} ${row.id}`}
        </b>
        <StateLabel tone={tones[row.change]}>{row.change}</StateLabel>
      </span>
      {row.fields.map(({ field, from, to }) => (
        <span key={field} className="block text-soft [overflow-wrap:anywhere]">
          {field}: {from !== null && <del>{from}</del>}
          {from !== null && to !== null && ' → '}
          {to !== null && <span className="text-ink">{to}</span>}
        </span>
      ))}
    </li>
  );
}
