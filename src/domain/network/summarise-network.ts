/** A network in a few numbers and one line, for lists and overviews. */
import type { NetworkDocument } from './document.ts';

export interface NetworkSummary {
  species: number;
  boundarySpecies: number;
  reactions: number;
  /** Reactions whose law is an expression rather than mass action. */
  expressionLaws: number;
  /** Global and local parameters. */
  parameters: number;
  compartments: number;
  assignmentRules: number;
  observables: number;
  /** Timed and triggered changes. */
  changes: number;
  /** Σ of the initial counts that are whole numbers. */
  initialMolecules: number;
  /** For example “4 species · 4 reactions · 4 parameters”. */
  text: string;
}

/** Counts the rows of a document, sound or not. */
export function summariseNetwork(document: NetworkDocument): NetworkSummary {
  const { species, reactions } = document;
  const local = reactions.reduce((sum, { localParameters }) => sum + (localParameters?.length ?? 0), 0);
  const parameters = (document.parameters?.length ?? 0) + local;
  return {
    species: species.length,
    boundarySpecies: species.filter(({ boundary }) => boundary).length,
    reactions: reactions.length,
    expressionLaws: reactions.filter(({ rateLaw }) => rateLaw.kind === 'expression').length,
    parameters,
    compartments: document.compartments?.length ?? 0,
    assignmentRules: document.assignmentRules?.length ?? 0,
    observables: document.observables?.length ?? 0,
    changes: document.changes?.length ?? 0,
    initialMolecules: species.reduce(
      (sum, { initialCount }) => sum + (Number.isSafeInteger(initialCount) ? initialCount : 0),
      0,
    ),
    text: [
      counted(species.length, 'species', 'species'),
      counted(reactions.length, 'reaction', 'reactions'),
      counted(parameters, 'parameter', 'parameters'),
    ].join(' · '),
  };
}

const counted = (count: number, one: string, many: string): string =>
  `${count.toLocaleString('en')} ${count === 1 ? one : many}`;
