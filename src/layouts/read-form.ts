/** Reads a form posted to a page: the same contract and services as the API, so that pages work before script. */
import type { AstroGlobal } from 'astro';
import type { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Refusal, type Result } from '@/domain/refusals.ts';
import { parseWith } from '@/server/http/endpoint.ts';
import { readBody } from '@/server/http/read-body.ts';

export interface PostedForm<T> {
  /** What was typed, to be shown again; passwords are left out. */
  values: Record<string, string>;
  parsed: Result<T>;
}

export async function readForm<S extends z.ZodType>(page: AstroGlobal, schema: S): Promise<PostedForm<z.output<S>>> {
  const type = page.request.headers.get('content-type') ?? '';
  if (!type.startsWith('application/x-www-form-urlencoded'))
    return { values: {}, parsed: refuse('unsupported_media_type', 'This page reads its own form only.') };
  const raw = await readBody(page.request, limits.bodyBytes);
  if (!raw.ok) return { values: {}, parsed: raw };
  const fields = Object.fromEntries(new URLSearchParams(raw.value));
  const values = Object.fromEntries(Object.entries(fields).filter(([name]) => !/password|token/i.test(name)));
  const parsed = parseWith(schema, fields, '');
  return { values, parsed: parsed.ok ? accept(parsed.value as z.output<S>) : parsed };
}

/** The message for each field of a refusal, and whether anything is left to say above the form. */
export function faultsByField(refusal: Refusal | null): Record<string, string | undefined> {
  return Object.fromEntries((refusal?.errors ?? []).map(({ path, message }) => [path, message]));
}
