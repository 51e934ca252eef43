/** A CSV file as an HTTP answer, made piece by piece while it is read. */

/** Begins with a byte order mark, without which spreadsheets take UTF-8 for something else. */
export function csvResponse(filename: string, pieces: AsyncIterable<string> | Iterable<string>): Response {
  const iterator = textOf(pieces);
  const encoder = new TextEncoder();
  const body = new ReadableStream<Uint8Array>({
    async pull(controller) {
      const { value, done } = await iterator.next();
      if (done) controller.close();
      else controller.enqueue(encoder.encode(value));
    },
    async cancel() {
      await iterator.return?.(undefined);
    },
  });
  return new Response(body, {
    headers: {
      'Content-Type': 'text/csv; charset=utf-8',
      'Content-Disposition': `attachment; filename="${filename.replaceAll(/[^A-Za-z0-9.-]/g, '_')}"`,
      'Cache-Control': 'private, no-store',
    },
  });
}

async function* textOf(pieces: AsyncIterable<string> | Iterable<string>): AsyncGenerator<string> {
  yield '\uFEFF';
  yield* pieces;
}
