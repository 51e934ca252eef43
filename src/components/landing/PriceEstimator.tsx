/** What an ensemble would cost, from the price book in force: replicates × events each, on a lane, seen on a column. */
import { useId, useState } from 'react';
import { creditsText, moneyText, roughCountText } from '@/components/ui/amounts-text.ts';
import { GraduatedColumn } from '@/components/ui/GraduatedColumn.tsx';
import { RadioField, SelectField } from '@/components/ui/Field.tsx';
import { currencies, rateOf, type Currency, type Lane, type PriceBook } from '@/domain/pricing/price-book.ts';
import { estimatePrice, packFor } from './estimate-price.ts';
import { LogSlider } from './LogSlider.tsx';

export type SoldBook = Pick<PriceBook, 'microcreditsPerMillionEvents' | 'packs'>;

const laneWords: Record<Lane, string> = { steady: 'Steady', express: 'Express', overnight: 'Overnight' };
const laneHints: Record<Lane, string> = {
  steady: 'runs in turn',
  express: 'goes ahead of the queue',
  overnight: 'runs when nothing else waits',
};
const currencyWords: Record<Currency, string> = { EUR: 'Euro', GBP: 'Pound sterling', USD: 'US dollar' };

export function PriceEstimator({ book }: { book: SoldBook }) {
  const [replicates, setReplicates] = useState(10_000);
  const [events, setEvents] = useState(2_000);
  const [lane, setLane] = useState<Lane>('steady');
  const [currency, setCurrency] = useState<Currency>('EUR');
  const laneName = useId();
  const microcredits = estimatePrice({
    replicates,
    eventsPerReplicate: events,
    rate: rateOf(book as PriceBook, lane, 'exact'),
  });
  const pack = packFor(book.packs, microcredits);
  const packMicrocredits = pack.packs * pack.pack.credits * 1_000_000;
  const worthMinor = Math.ceil((pack.pack.netMinor[currency] * (microcredits / 1_000_000)) / pack.pack.credits);

  return (
    <div className="grid gap-8 border border-rule bg-panel p-5 sm:p-7 md:grid-cols-[minmax(0,1fr)_12.5rem]">
      <div className="flex flex-col gap-5">
        <LogSlider label="Replicates" least={100} most={1_000_000} value={replicates} onChange={setReplicates} />
        <LogSlider
          label="Reaction events in one replicate"
          hint="A pilot of real replicates measures this before every run. Here it is your guess."
          least={10}
          most={10_000_000}
          value={events}
          onChange={setEvents}
        />
        <div className="grid gap-5 sm:grid-cols-[minmax(0,1fr)_10rem]">
          <RadioField
            legend="Lane"
            name={laneName}
            value={lane}
            onChange={(value) => setLane(value as Lane)}
            choices={(Object.keys(laneWords) as Lane[]).map((id) => ({
              value: id,
              label: laneWords[id],
              hint: laneHints[id],
            }))}
          />
          <SelectField
            label="Currency"
            value={currency}
            onChange={(event) => setCurrency(event.target.value as Currency)}
            choices={currencies.map((code) => ({ value: code, label: currencyWords[code] }))}
          />
        </div>
        <div aria-live="polite" className="border-t border-ink pt-4">
          <p className="text-2xl font-bold">{creditsText(microcredits, 'up')} credits</p>
          <p className="text-soft">
            {roughCountText(replicates * events)} events, about {moneyText(worthMinor, currency)} before tax at the
            price of {pack.packs > 1 ? `${pack.packs} packs` : 'a pack'} of {pack.pack.credits.toLocaleString('en-GB')}{' '}
            credits.
          </p>
        </div>
      </div>
      <figure className="flex flex-col">
        <figcaption className="mb-4 text-sm text-soft">
          {pack.packs > 1 ? `${pack.packs} packs` : 'A pack'} of {pack.pack.credits.toLocaleString('en-GB')} credits;
          the pink line is the level after this job.
        </figcaption>
        <div className="h-[22rem] min-h-0 grow pb-12">
          <GraduatedColumn
            size="large"
            availableMicrocredits={packMicrocredits}
            heldMicrocredits={0}
            quote={{ expectedMicrocredits: microcredits, highMicrocredits: microcredits }}
          />
        </div>
      </figure>
    </div>
  );
}
