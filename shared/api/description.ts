/** What the API says of itself. */
import { z } from 'zod';
import { route } from './contract';

export const describeApi = route({
  id: 'api.describe',
  method: 'GET',
  path: '/api/openapi.json',
  summary: 'This description of the API (OpenAPI 3.1)',
  response: z.record(z.string(), z.unknown()),
});
