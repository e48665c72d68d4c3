import { endpoint } from '$lib/server/api/endpoint';
import { meShape } from '$lib/server/api/shapes';

export const GET = endpoint({
  summary: 'Who I am',
  right: 'signed-in',
  answer: meShape,
  handler: async ({ user }) => user
});
