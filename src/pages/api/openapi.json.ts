import { contracts } from '@/contracts/index.ts';
import { openApiDocument } from '@/contracts/open-api.ts';
import { openApi } from '@/contracts/system.ts';
import { accept } from '@/domain/refusals.ts';
import { env } from '@/server/env.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(openApi, async () => accept(openApiDocument(contracts, env().PUBLIC_URL)));
