/** The API's description of itself: sound by the standard's own schema, complete, and kept by what is answered. */
import type { Express } from 'express';
import { Validator } from '@seriousme/openapi-schema-validator';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { allRoutes } from '@shared/api';
import { startApp, type TestApp } from '../support/app';
import { type Description, operationsOf } from './api-description';

let app: TestApp;
let description: Description;
beforeAll(async () => {
  app = await startApp();
  description = (await app.nobody().get<Description>('/api/openapi.json')).body;
});
afterAll(() => app.close());

interface Layer { route?: { path: string; methods: Record<string, boolean> }; handle?: { stack?: Layer[] } }

/** What the running server has mounted under /api, asked of its router. */
function mounted(): string[] {
  const express = app.book.server.listeners('request')[0] as Express & { router: { stack: Layer[] } };
  const routesOf = (layers: Layer[]): string[] => layers.flatMap(({ route, handle }) => (route
    ? Object.keys(route.methods).map((method) => `${method.toUpperCase()} ${route.path.replace(/:(\w+)/g, '{$1}')}`)
    : routesOf(handle?.stack ?? [])));
  return routesOf(express.router.stack).filter((route) => route.includes(' /api')).sort();
}

describe('the description of the API', () => {
  it('is a valid OpenAPI 3.1 document', async () => {
    // The published JSON Schema of OpenAPI 3.1, in @seriousme/openapi-schema-validator.
    const validator = new Validator();
    expect(await validator.validate(structuredClone(description) as unknown as Record<string, unknown>)).toEqual({ valid: true });
    expect(validator.version).toBe('3.1');
  });

  it('lists every route that is mounted, and none that is not', () => {
    const described = [...operationsOf(description).values()].map(({ method, path }) => `${method} ${path}`).sort();
    expect(described).toEqual(mounted());
    expect(described).toHaveLength(allRoutes.length);
  });

  it('names each operation once, each parameter of a path, and a problem for everything that goes wrong', () => {
    const operations = Object.values(description.paths).flatMap((methods) => Object.values(methods));
    expect(new Set(operations.map(({ operationId }) => operationId)).size).toBe(operations.length);
    for (const { path, operation } of operationsOf(description).values()) {
      const inPath = (operation.parameters ?? []).filter((each) => each.in === 'path');
      expect(inPath.map(({ name }) => name).sort(), path).toEqual([...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name).sort());
      expect(operation.responses['default'], path).toEqual({ $ref: '#/components/responses/Problem' });
    }
  });

  it('refers to nothing that is not in it', () => {
    const references = [...JSON.stringify(description).matchAll(/"\$ref":"([^"]+)"/g)].map(([, reference = '']) => reference);
    expect(references.length).toBeGreaterThan(0);
    for (const reference of new Set(references)) {
      const found = reference.split('/').slice(1).reduce<unknown>((at, step) => (at as Record<string, unknown> | undefined)?.[step], description);
      expect(found, reference).toBeDefined();
    }
  });

  it('says which routes answer whoever asks', async () => {
    const open = [...operationsOf(description)].filter(([, { operation }]) => operation.security?.length === 0).map(([id]) => id);
    expect(open.sort()).toEqual(['api.describe', 'auth.passwordReset', 'auth.requestReset', 'auth.session', 'auth.signIn', 'auth.signOut', 'entrance.get', 'setup.make']);
  });
});

describe('an address that is no route', () => {
  it.each([
    ['GET', '/api/nothing'], ['GET', '/api'], ['POST', '/api/me'], ['DELETE', '/api/rigs'], ['GET', '/api/auth/ok'],
    // Endpoints of the sign-in library that are not ours.
    ['POST', '/api/auth/sign-up/email'], ['POST', '/api/auth/update-user'], ['POST', '/api/auth/delete-user'], ['POST', '/api/auth/change-email'],
    ['POST', '/api/auth/sign-in/social'], ['GET', '/api/auth/list-accounts'], ['POST', '/api/auth/update-session'], ['GET', '/api/auth/error'],
  ])('%s %s says so', async (method, path) => {
    const { status, body, headers } = await app.nobody().send(method, path);
    expect([status, body['code']]).toEqual([404, 'ROUTE_UNKNOWN']);
    expect(headers.get('content-type')).toContain('application/problem+json');
  });
});
