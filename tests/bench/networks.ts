/** The networks that the bench runs: the same systems, constants and horizons as the C programs beside this file. */
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { network } from '@tests/factories/networks.ts';

export interface BenchNetwork {
  /** Also the name of the C program. */
  name: string;
  network: ResolvedNetwork;
  horizon: number;
  gridIntervals: number;
  /** What the table of the design asks of the ratio to hand-written C. */
  handAtLeast: number;
}

const schloegl = network({
  counts: { A: 100_000, B: 200_000, X: 250 },
  boundary: ['A', 'B'],
  reactions: [
    { consumes: { A: 1, X: 2 }, produces: { X: 3 }, rate: 3e-7 },
    { consumes: { X: 3 }, produces: { X: 2, A: 1 }, rate: 1e-4 },
    { consumes: { B: 1 }, produces: { X: 1 }, rate: 1e-3 },
    { consumes: { X: 1 }, produces: { B: 1 }, rate: 3.5 },
  ],
});

/** Vilar, Kueh, Barkai & Leibler, "Mechanisms of noise-resistance in genetic oscillators" (PNAS 2002), from memory. */
const oscillator = network({
  counts: { DA: 1, DA1: 0, DR: 1, DR1: 0, MA: 0, MR: 0, A: 0, R: 0, C: 0 },
  reactions: [
    { consumes: { DA: 1, A: 1 }, produces: { DA1: 1 }, rate: 1 },
    { consumes: { DA1: 1 }, produces: { DA: 1, A: 1 }, rate: 50 },
    { consumes: { DR: 1, A: 1 }, produces: { DR1: 1 }, rate: 1 },
    { consumes: { DR1: 1 }, produces: { DR: 1, A: 1 }, rate: 100 },
    { consumes: { DA: 1 }, produces: { DA: 1, MA: 1 }, rate: 50 },
    { consumes: { DA1: 1 }, produces: { DA1: 1, MA: 1 }, rate: 500 },
    { consumes: { DR: 1 }, produces: { DR: 1, MR: 1 }, rate: 0.01 },
    { consumes: { DR1: 1 }, produces: { DR1: 1, MR: 1 }, rate: 50 },
    { consumes: { MA: 1 }, produces: { MA: 1, A: 1 }, rate: 50 },
    { consumes: { MR: 1 }, produces: { MR: 1, R: 1 }, rate: 5 },
    { consumes: { A: 1, R: 1 }, produces: { C: 1 }, rate: 2 },
    { consumes: { C: 1 }, produces: { R: 1 }, rate: 1 },
    { consumes: { MA: 1 }, rate: 10 },
    { consumes: { MR: 1 }, rate: 0.5 },
    { consumes: { A: 1 }, rate: 1 },
    { consumes: { R: 1 }, rate: 0.2 },
  ],
});

export const smallNetworks: BenchNetwork[] = [
  {
    name: 'immigration-death',
    network: network({
      counts: { X: 1000 },
      reactions: [
        { produces: { X: 1 }, rate: 1000 },
        { consumes: { X: 1 }, rate: 1 },
      ],
    }),
    horizon: 10,
    gridIntervals: 10,
    handAtLeast: 1.5,
  },
  {
    name: 'enzyme',
    network: network({
      counts: { S: 10_000, E: 200, ES: 0, P: 0 },
      reactions: [
        { consumes: { S: 1, E: 1 }, produces: { ES: 1 }, rate: 0.001 },
        { consumes: { ES: 1 }, produces: { S: 1, E: 1 }, rate: 0.5 },
        { consumes: { ES: 1 }, produces: { E: 1, P: 1 }, rate: 0.1 },
      ],
    }),
    horizon: 100,
    gridIntervals: 10,
    handAtLeast: 2.2,
  },
  {
    name: 'dimerisation',
    network: network({
      counts: { P: 1000, P2: 0 },
      reactions: [
        { consumes: { P: 2 }, produces: { P2: 1 }, rate: 0.001 },
        { consumes: { P2: 1 }, produces: { P: 2 }, rate: 0.1 },
      ],
    }),
    horizon: 200,
    gridIntervals: 10,
    handAtLeast: 2.2,
  },
  { name: 'schloegl', network: schloegl, horizon: 10, gridIntervals: 10, handAtLeast: 2.2 },
  { name: 'oscillator', network: oscillator, horizon: 50, gridIntervals: 10, handAtLeast: 2.2 },
];
