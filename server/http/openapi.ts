/** The description of the API (OpenAPI 3.1), made from the contracts that the routes themselves run on. */
import { z } from 'zod';
import { allRoutes, type RouteId } from '@shared/api';
import { problem } from '@shared/api/common';
import type { RouteContract } from '@shared/api/contract';

type JsonObject = Record<string, unknown>;

/** Callers send the input side of a schema and read its output side. Bytes and open values are described as anything. */
function schemaOf(schema: z.ZodType, io: 'input' | 'output'): JsonObject {
  const { $schema: _dialect, ...rest } = z.toJSONSchema(schema, { io, unrepresentable: 'any' });
  return rest;
}

const pathOf = (path: string) => path.replace(/:(\w+)/g, '{$1}');

function parametersOf(contract: RouteContract): JsonObject[] {
  const of = (schema: z.ZodType | undefined, place: 'path' | 'query') => {
    if (schema === undefined) return [];
    const { properties = {}, required = [] } = schemaOf(schema, 'input') as { properties?: Record<string, JsonObject>; required?: string[] };
    return Object.entries(properties).map(([name, each]) => ({ name, in: place, required: place === 'path' || required.includes(name), schema: each }));
  };
  return [...of(contract.params, 'path'), ...of(contract.query, 'query')];
}

function answerOf(contract: RouteContract): JsonObject {
  if (contract.binary !== undefined) return { description: contract.summary, content: { [contract.binary]: { schema: { type: 'string', format: 'binary' } } } };
  const schema = contract.response ? schemaOf(contract.response, 'output') : {};
  return { description: contract.summary, content: { 'application/json': { schema } } };
}

const operationOf = (contract: RouteContract, isOpen: boolean): JsonObject => ({
  operationId: contract.id,
  summary: contract.summary,
  tags: [contract.id.split('.')[0]],
  ...(isOpen ? { security: [] } : {}),
  parameters: parametersOf(contract),
  ...(contract.takes ? { requestBody: { required: true, content: Object.fromEntries(contract.takes.map((type) => [type, { schema: { type: 'string', format: 'binary' } }])) } } : {}),
  ...(contract.body ? { requestBody: { required: true, content: { 'application/json': { schema: schemaOf(contract.body, 'input') } } } } : {}),
  responses: { 200: answerOf(contract), default: { $ref: '#/components/responses/Problem' } },
});

/** @param isOpen tells the routes that answer whoever asks */
export function describeApi(version: string, isOpen: (id: RouteId) => boolean): JsonObject {
  const paths: Record<string, JsonObject> = {};
  for (const contract of allRoutes) {
    const path = pathOf(contract.path);
    paths[path] = { ...paths[path], [contract.method.toLowerCase()]: operationOf(contract, isOpen(contract.id as RouteId)) };
  }
  return {
    openapi: '3.1.0',
    info: {
      title: 'Tautbook',
      version,
      description: 'Record of user studies on cable-driven haptic teleoperation rigs. A research record, not a medical device and not a safety system.',
    },
    servers: [{ url: '/' }],
    security: [{ signIn: [] }],
    paths,
    components: {
      securitySchemes: { signIn: { type: 'apiKey', in: 'cookie', name: 'tautbook.session_token', description: 'Set by POST /api/auth/sign-in/email.' } },
      schemas: { Problem: schemaOf(problem, 'output') },
      responses: { Problem: { description: 'What went wrong, with a stable code and a way out (RFC 9457)', content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } } } },
    },
  };
}
