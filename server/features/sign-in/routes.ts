import type { Response } from 'express';
import { changePassword, endOtherSignIns, endSignIn, getSignIn, listSignIns, makeSignIn, requestReset, resetPassword, signOut } from '@shared/api/sign-in';
import type { Answered, SignInDesk } from '../../auth';
import { type ApiRouter, serve } from '../../http';

const done = { done: true as const };

/** The cookies that a sign-in made, prolonged or ended. */
function withCookies<T>(response: Response, { answer, setCookies }: Answered<T>): T {
  if (setCookies.length > 0) response.append('Set-Cookie', setCookies);
  return answer;
}

export function signInRoutes(router: ApiRouter, desk: SignInDesk): void {
  serve(router, makeSignIn, async ({ body, request, response, note }) => {
    const person = withCookies(response, await desk.signIn(request.headers, body));
    note({ by: person, subject: person.id });
    return done;
  });
  serve(router, signOut, async ({ request, response }) => {
    withCookies(response, await desk.signOut(request.headers));
    return done;
  });
  serve(router, getSignIn, async ({ request }) => {
    const session = await desk.present(request.headers);
    return session && { session };
  });
  serve(router, listSignIns, ({ request }) => desk.list(request.headers));
  serve(router, endSignIn, async ({ body, request, response, person, note }) => {
    note({ subject: person.id });
    withCookies(response, await desk.end(request.headers, body.token));
    return done;
  });
  serve(router, endOtherSignIns, async ({ request, person, note }) => {
    note({ subject: person.id });
    await desk.endOthers(request.headers);
    return done;
  });
  serve(router, changePassword, async ({ body, request, response, person, note }) => {
    note({ subject: person.id });
    withCookies(response, await desk.changePassword(request.headers, body));
    return done;
  });
  serve(router, requestReset, async ({ body }) => {
    await desk.requestReset(body.email);
    return done;
  });
  serve(router, resetPassword, async ({ body, note }) => {
    const person = await desk.resetPassword(body);
    note({ by: person, subject: person.id });
    return done;
  });
}
