import {
  addParticipant, changeStudy, createStudy, getStudy, joinStudy, listAllStudies, listCandidates, listParticipants, listStudies, removeMember, setMember,
} from '@shared/api/studies';
import { type ApiRouter, serve } from '../../http';
import type { StudyService } from './service';

export function studyRoutes(router: ApiRouter, studies: StudyService): void {
  serve(router, listStudies, async ({ person }) => ({ studies: await studies.list(person) }));
  serve(router, listAllStudies, ({ person }) => studies.listAll(person));
  serve(router, createStudy, ({ body, person, note }) => {
    note({ detail: { code: body.code } });
    return studies.create(body, person);
  });
  serve(router, getStudy, ({ membership, person }) => studies.get(membership, person));
  serve(router, changeStudy, ({ membership, body, person, note }) => {
    note({ detail: { changed: Object.keys(body), ...(body.state ? { state: body.state } : {}) } });
    return studies.change(membership, body, person);
  });
  serve(router, setMember, ({ params, body, note }) => {
    note({ detail: { ...body } });
    return studies.setMember(params.studyId, params.personId, body.role, body.blind);
  });
  serve(router, joinStudy, ({ params, person }) => studies.join(params.studyId, person));
  serve(router, removeMember, async ({ params }) => {
    await studies.removeMember(params.studyId, params.personId);
    return { done: true as const };
  });
  serve(router, listCandidates, ({ params }) => studies.candidates(params.studyId));
  serve(router, listParticipants, ({ params }) => studies.participants(params.studyId));
  serve(router, addParticipant, ({ params, body, note }) => {
    note({ detail: { code: body.code } });
    return studies.addParticipant(params.studyId, body);
  });
}
