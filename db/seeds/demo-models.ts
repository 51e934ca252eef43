/** The demo's four models. Chemistry that a practitioner knows; every number is invented. */
import type { NetworkDocument } from '@/domain/network/document.ts';

export interface DemoModel {
  name: string;
  network: NetworkDocument;
}

const massAction = (constant: string) => ({ kind: 'massAction', constant }) as const;
const expression = (text: string) => ({ kind: 'expression', expression: text }) as const;

export const enzyme: DemoModel = {
  name: 'Nitrilase in a droplet',
  network: {
    timeUnit: 's',
    compartments: [{ id: 'droplet', name: 'Droplet', size: 2e-15, unit: 'L' }],
    species: [
      { id: 'E', name: 'Free enzyme', compartment: 'droplet', initialCount: 12 },
      { id: 'S', name: 'Substrate', compartment: 'droplet', initialCount: 600 },
      { id: 'ES', name: 'Enzyme-substrate complex', compartment: 'droplet', initialCount: 0 },
      { id: 'EP', name: 'Enzyme-product complex', compartment: 'droplet', initialCount: 0 },
      { id: 'P', name: 'Product', compartment: 'droplet', initialCount: 0 },
    ],
    parameters: [
      { id: 'k_bind', name: 'Binding, per pair', value: 0.0017, unit: '1/s' },
      { id: 'k_unbind', name: 'Unbinding', value: 0.35, unit: '1/s' },
      { id: 'k_turn', name: 'Chemical step', value: 0.9, unit: '1/s' },
      { id: 'k_release', name: 'Product release', value: 2.4, unit: '1/s' },
    ],
    reactions: [
      { id: 'bind', name: 'Substrate binds', equation: 'E + S → ES', rateLaw: massAction('k_bind') },
      { id: 'unbind', name: 'Substrate leaves', equation: 'ES → E + S', rateLaw: massAction('k_unbind') },
      { id: 'turn', name: 'Substrate becomes product', equation: 'ES → EP', rateLaw: massAction('k_turn') },
      { id: 'release', name: 'Product leaves', equation: 'EP → E + P', rateLaw: massAction('k_release') },
    ],
  },
};

export const expressionModel: DemoModel = {
  name: 'Reporter expression, two stages',
  network: {
    timeUnit: 'min',
    species: [
      { id: 'M', name: 'Messenger RNA', initialCount: 0 },
      { id: 'G', name: 'Reporter protein', initialCount: 0 },
    ],
    parameters: [
      { id: 'k_make', name: 'mRNA synthesis', value: 0.6, unit: '1/min' },
      { id: 'k_translate', name: 'Translation', value: 1.8, unit: '1/min' },
      { id: 'd_messenger', name: 'Messenger decay', value: 0.22, unit: '1/min' },
      { id: 'd_protein', name: 'Protein dilution', value: 0.024, unit: '1/min' },
    ],
    reactions: [
      { id: 'make', name: 'mRNA is made', equation: '∅ → M', rateLaw: massAction('k_make') },
      { id: 'translate', name: 'Translation', equation: 'M → M + G', rateLaw: massAction('k_translate') },
      { id: 'decay', name: 'Messenger decays', equation: 'M → ∅', rateLaw: massAction('d_messenger') },
      { id: 'dilute', name: 'Protein diluted', equation: 'G → ∅', rateLaw: massAction('d_protein') },
    ],
  },
};

export const bistableSwitch: DemoModel = {
  name: 'Two-repressor switch',
  network: {
    timeUnit: 'h',
    species: [
      { id: 'A', name: 'Repressor A', initialCount: 40 },
      { id: 'B', name: 'Repressor B', initialCount: 40 },
    ],
    parameters: [
      { id: 'a_max', name: 'Most A made', value: 62, unit: '1/h' },
      { id: 'b_max', name: 'Most B made', value: 58, unit: '1/h' },
      { id: 'leak', name: 'Leak', value: 1.1, unit: '1/h' },
      { id: 'K', name: 'Half repression', value: 17 },
      { id: 'n', name: 'Cooperativity', value: 2 },
      { id: 'd', name: 'Dilution', value: 0.7, unit: '1/h' },
    ],
    reactions: [
      { id: 'make_A', name: 'A is made', equation: '∅ → A', rateLaw: expression('leak + a_max / (1 + (B / K)^n)') },
      { id: 'make_B', name: 'B is made', equation: '∅ → B', rateLaw: expression('leak + b_max / (1 + (A / K)^n)') },
      { id: 'lose_A', name: 'A diluted', equation: 'A → ∅', rateLaw: massAction('d') },
      { id: 'lose_B', name: 'B diluted', equation: 'B → ∅', rateLaw: massAction('d') },
    ],
  },
};

export const wardOutbreak: DemoModel = {
  name: 'Ward outbreak',
  network: {
    timeUnit: 'day',
    species: [
      { id: 'S', name: 'Susceptible', initialCount: 26 },
      { id: 'I', name: 'Infectious', initialCount: 2 },
      { id: 'R', name: 'Recovered', initialCount: 0 },
    ],
    parameters: [
      { id: 'beta', name: 'Contacts that infect', value: 0.42, unit: '1/day' },
      { id: 'gamma', name: 'Recovery', value: 0.19, unit: '1/day' },
      { id: 'N', name: 'Beds', value: 28 },
    ],
    reactions: [
      { id: 'infect', name: 'Infection', equation: 'S + I → 2 I', rateLaw: expression('beta * S * I / N') },
      { id: 'recover', name: 'Recovery', equation: 'I → R', rateLaw: massAction('gamma') },
    ],
  },
};

export const demoModels: DemoModel[] = [enzyme, expressionModel, bistableSwitch, wardOutbreak];
