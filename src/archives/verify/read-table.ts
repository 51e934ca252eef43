/** Reads one of our own tables row by row: plain cells without quotes, a known head, a bounded line. */

/** What is wrong with a table, in a sentence. */
export class TableError extends Error {}

const longestLine = 2 ** 20;

export async function* readTable(
  path: string,
  pieces: AsyncIterable<Uint8Array>,
  head: readonly string[] | null,
): AsyncIterable<string[]> {
  let line = 0;
  for await (const text of lines(path, pieces)) {
    line++;
    if (text.includes('"'))
      throw new TableError(`${path}, line ${line}: a quoted cell, which no row of this table has.`);
    const cells = text.split(',');
    if (line === 1 && head && text !== head.join(','))
      throw new TableError(`${path} does not begin with ${head.join(',')}.`);
    if (head && cells.length !== head.length) throw new TableError(`${path}, line ${line}: ${cells.length} cells.`);
    if (line > 1 || head === null) yield cells;
  }
  if (line === 0) throw new TableError(`${path} is empty.`);
}

async function* lines(path: string, pieces: AsyncIterable<Uint8Array>): AsyncIterable<string> {
  const decoder = new TextDecoder();
  let rest = '';
  for await (const piece of pieces) {
    const parts = (rest + decoder.decode(piece, { stream: true })).split('\n');
    rest = parts.pop()!;
    yield* parts;
    if (rest.length > longestLine) throw new TableError(`${path} has a line that is too long.`);
  }
  if (rest !== '') throw new TableError(`${path} does not end with a line feed: it is cut short.`);
}
