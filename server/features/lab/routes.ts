import { listAudit, listOutbox } from '@shared/api/people';
import { type ApiRouter, serve } from '../../http';
import type { LabService } from './service';

export function labRoutes(router: ApiRouter, lab: LabService): void {
  serve(router, listOutbox, () => lab.outbox());
  serve(router, listAudit, ({ query }) => lab.audit(query));
}
