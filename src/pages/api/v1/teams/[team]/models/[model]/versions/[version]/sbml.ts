import { exportSbml as exportContract } from '@/contracts/network.ts';
import { exportSbml } from '@/server/network/export-sbml.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(exportContract, async ({ actor, parameters }) => {
  const exported = await exportSbml({
    actor,
    team: parameters['team']!,
    model: parameters['model']!,
    version: parameters['version']!,
  });
  if (!exported.ok) return exported;
  return new Response(exported.value.text, {
    headers: {
      'Content-Type': 'application/sbml+xml; charset=utf-8',
      'Content-Disposition': `attachment; filename="${exported.value.fileName}"`,
      'Cache-Control': 'private, no-cache',
    },
  });
});
