import { giveVerdicts, listMoments, listVerdicts } from '@shared/api/review';
import { type ApiRouter, serve } from '../../http';
import type { ReviewService } from './service';

export function reviewRoutes(router: ApiRouter, review: ReviewService): void {
  serve(router, listMoments, async ({ params, membership }) => ({ moments: await review.moments(params.studyId, membership) }));
  serve(router, listVerdicts, ({ params }) => review.ofTrial(params.trialId));
  serve(router, giveVerdicts, ({ params, body, person, note }) => {
    note({ subject: params.studyId, detail: { verdicts: body.verdicts.map(({ flagId, value }) => ({ flagId, value })) } });
    return review.give(params.studyId, body, person);
  });
}
