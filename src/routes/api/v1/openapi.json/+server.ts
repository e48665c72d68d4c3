import { z } from 'zod';
import { endpoint, type Endpoint } from '$lib/server/api/endpoint';
import { describeApi } from '$lib/server/api/openapi';
import { collect } from '$lib/server/api/registry';

const modules = import.meta.glob<object>(['../**/+server.ts', '!./+server.ts'], { eager: true });

export const GET: Endpoint = endpoint({
  summary: 'This description',
  right: 'public',
  answer: z.looseObject({}),
  handler: async () =>
    describeApi(
      collect({
        ...Object.fromEntries(
          Object.entries(modules).map(([name, module]) => [name.replace('..', '/routes/api/v1'), module])
        ),
        '/routes/api/v1/openapi.json/+server.ts': { GET }
      })
    )
});
