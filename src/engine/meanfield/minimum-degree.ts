/** Chooses an order of elimination that keeps the factors of a sparse matrix sparse. */
import type { SparsePattern } from './sparse-matrix.ts';

export interface EliminationOrder {
  /** Columns in the order in which they are eliminated. */
  columns: Int32Array;
  /** Multiplications of one factorisation on the diagonal, as far as the pattern tells. */
  multiplications: number;
}

/**
 * Minimum degree on the graph of the pattern and its transpose: the vertex with the fewest neighbours goes next, and its
 * neighbours become a clique (Tinney & Walker 1967, Proc. IEEE 55:1801; George & Liu 1989, SIAM Rev. 31:1; citations
 * from memory). The order depends on the pattern alone. Null as soon as the factorisation would
 * take more than `multiplicationLimit`, which also bounds the work here.
 */
export function minimumDegreeOrder(pattern: SparsePattern, multiplicationLimit: number): EliminationOrder | null {
  const neighbours = neighboursOf(pattern);
  const waiting = new DegreeQueue(neighbours.map(({ size }) => size));
  const columns = new Int32Array(pattern.size);
  let multiplications = 0;
  for (let step = 0; step < pattern.size; step++) {
    const vertex = waiting.takeLeast();
    columns[step] = vertex;
    const clique = [...neighbours[vertex]!].sort((a, b) => a - b);
    if (clique.length === pattern.size - step - 1) {
      // What is left is one clique, where any order is as good: no more sets need to be joined.
      columns.set(clique, step + 1);
      for (let degree = clique.length; degree > 0; degree--) multiplications += degree * (degree + 1);
      return multiplications > multiplicationLimit ? null : { columns, multiplications };
    }
    multiplications += clique.length * (clique.length + 1);
    if (multiplications > multiplicationLimit) return null;
    for (const member of clique) {
      const own = neighbours[member]!;
      own.delete(vertex);
      for (const other of clique) if (other !== member) own.add(other);
      waiting.move(member, own.size);
    }
  }
  return { columns, multiplications };
}

function neighboursOf({ size, columnStart, rows }: SparsePattern): Set<number>[] {
  const neighbours = Array.from({ length: size }, () => new Set<number>());
  for (let column = 0; column < size; column++) {
    for (let position = columnStart[column]!; position < columnStart[column + 1]!; position++) {
      const row = rows[position]!;
      if (row === column) continue;
      neighbours[row]!.add(column);
      neighbours[column]!.add(row);
    }
  }
  return neighbours;
}

/** Vertices by degree. A bucket's stale entries are passed over when met. */
class DegreeQueue {
  #degree: number[];
  #taken: boolean[];
  #buckets: number[][] = [];
  #least = 0;

  constructor(degrees: number[]) {
    this.#degree = degrees;
    this.#taken = degrees.map(() => false);
    // From the highest index down, so that the lowest of a bucket is taken first.
    for (let vertex = degrees.length - 1; vertex >= 0; vertex--) this.#put(vertex);
  }

  #put(vertex: number): void {
    const degree = this.#degree[vertex]!;
    (this.#buckets[degree] ??= []).push(vertex);
    this.#least = Math.min(this.#least, degree);
  }

  move(vertex: number, degree: number): void {
    if (this.#degree[vertex] === degree) return;
    this.#degree[vertex] = degree;
    this.#put(vertex);
  }

  takeLeast(): number {
    for (;;) {
      const vertex = this.#buckets[this.#least]?.pop();
      if (vertex === undefined) this.#least++;
      else if (!this.#taken[vertex] && this.#degree[vertex] === this.#least) {
        this.#taken[vertex] = true;
        return vertex;
      }
    }
  }
}
