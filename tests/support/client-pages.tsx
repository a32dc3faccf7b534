/**
 * The client as a person meets it, in jsdom: the real router, forms and queries, with the server's answers written down.
 * An address without an answer is a fault of the test and rejects.
 */
import { cleanup, configure, render } from '@testing-library/react';
import { afterEach, vi } from 'vitest';
import { App } from '@client/app/App';
import { tellCaught } from '@client/app/tell-caught';
import type { Me } from '@shared/api/people';

// Pages fetch their code on a machine that may be busy with other tests.
configure({ asyncUtilTimeout: 15_000 });

interface Asked {
  method: string;
  path: string;
  body: unknown;
}

type Answer = unknown | ((asked: Asked) => unknown);

/** A refusal as the server words it. */
export const refusal = (status: number, code: string, more: object = {}) => new Response(
  JSON.stringify({ type: 'about:blank', title: code, status, code, detail: `It is refused: ${code}.`, ...more }),
  { status, headers: { 'content-type': 'application/problem+json' } },
);

export const silence = () => Promise.reject(new TypeError('Failed to fetch'));

export const aPerson = (more: Partial<Me> = {}): object => ({ id: 'p-1', name: 'Ines Marek', email: 'ines@lab.example', role: 'administrator', memberships: [], demo: false, ...more });

export const id = (n: number): string => `01890000-0000-7000-8000-${String(n).padStart(12, '0')}`;

/** A socket that never opens: these tests are about pages, not about the live line. */
class StillSocket {
  static readonly OPEN = 1;
  readyState = 0;
  close(): void {
    this.readyState = 3;
  }
}

/** Opens the book at an address. @returns what the client asked the server, in order */
export function openBook(address: string, answers: Readonly<Record<string, Answer>>): { asked: Asked[] } {
  const asked: Asked[] = [];
  vi.stubGlobal('WebSocket', StillSocket);
  vi.stubGlobal('fetch', async (input: RequestInfo | URL, init: RequestInit = {}) => {
    const request = input instanceof Request ? input : null;
    const url = new URL(request?.url ?? String(input), window.location.origin);
    const text = typeof init.body === 'string' ? init.body : await request?.text();
    const one: Asked = { method: init.method ?? request?.method ?? 'GET', path: url.pathname, body: text ? JSON.parse(text) : undefined };
    asked.push(one);
    const answer = answers[`${one.method} ${one.path}`];
    if (answer === undefined) throw new Error(`no answer written down for ${one.method} ${one.path}`);
    const given: unknown = await (typeof answer === 'function' ? answer(one) : answer);
    return given instanceof Response ? given.clone() : new Response(JSON.stringify(given), { headers: { 'content-type': 'application/json' } });
  });
  // Both are what a page without layout cannot do; nothing here depends on them.
  vi.stubGlobal('scrollTo', () => undefined);
  window.history.replaceState(null, '', address);
  render(<App />, { onCaughtError: tellCaught });
  return { asked };
}

afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
});
