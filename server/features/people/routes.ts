import { changeMe, changePerson, getEntrance, getMe, invitePerson, listPeople, setUp } from '@shared/api/people';
import { type ApiRouter, serve } from '../../http';
import type { PeopleService } from './service';

export function peopleRoutes(router: ApiRouter, people: PeopleService): void {
  serve(router, getEntrance, () => people.entrance());
  serve(router, setUp, async ({ body, note }) => {
    const made = await people.setUp(body);
    note({ by: made, subject: made.id, detail: { name: made.name, role: made.role } });
    return { done: true as const };
  });
  serve(router, getMe, ({ person }) => people.me(person));
  serve(router, changeMe, ({ body, person, note }) => {
    note({ subject: person.id, detail: { from: person.name, to: body.name } });
    return people.rename(person, body.name);
  });
  serve(router, listPeople, async () => ({ people: await people.list() }));
  serve(router, invitePerson, async ({ body, person, note }) => {
    note({ detail: { name: body.name, role: body.role } });
    return people.invite(body, person);
  });
  serve(router, changePerson, async ({ params, body, note }) => {
    const changed = await people.change(params.personId, body);
    note({ detail: { name: changed.name, ...body } });
    return changed;
  });
}
