import { health } from '@/contracts/system.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { reportHealth } from '@/server/http/report-health.ts';

export const GET = endpoint(health, () => reportHealth());
