import { getRig, getRigRevision, importRig, listRigs } from '@shared/api/rigs';
import { type ApiRouter, serve } from '../../http';
import type { RigService } from './service';

export function rigRoutes(router: ApiRouter, rigs: RigService): void {
  serve(router, listRigs, async () => ({ rigs: await rigs.list() }));
  serve(router, getRig, ({ params }) => rigs.get(params.rigId));
  serve(router, getRigRevision, ({ params }) => rigs.getRevision(params.rigRevisionId));
  serve(router, importRig, async ({ body, person, note }) => {
    const made = await rigs.import(body.file, body.remark, person);
    note({ detail: { code: made.code, revision: made.revision, digest: made.digest } });
    return made;
  });
}
