/** Reads a request body up to a limit: the framework sets none, so content-length is checked and bytes are counted. */
import { accept, refuse, type Result } from '@/domain/refusals.ts';

export async function readBody(request: Request, limitBytes: number): Promise<Result<string>> {
  const tooLarge = () =>
    refuse('too_large', `The body is larger than ${limitBytes.toLocaleString('en')} bytes. Nothing was stored.`);
  const declared = Number(request.headers.get('content-length') ?? 0);
  if (declared > limitBytes) return tooLarge();
  if (!request.body) return accept('');
  const chunks: Uint8Array[] = [];
  let size = 0;
  for await (const chunk of request.body as unknown as AsyncIterable<Uint8Array>) {
    size += chunk.byteLength;
    if (size > limitBytes) return tooLarge();
    chunks.push(chunk);
  }
  try {
    return accept(new TextDecoder('utf-8', { fatal: true }).decode(Buffer.concat(chunks)));
  } catch {
    return refuse('invalid_input', 'The body is not UTF-8 text.');
  }
}
