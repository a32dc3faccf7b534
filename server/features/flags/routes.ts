import { listFlags } from '@shared/api/sessions';
import { type ApiRouter, serve } from '../../http';
import type { FlagService } from './service';

export function flagRoutes(router: ApiRouter, flags: FlagService): void {
  serve(router, listFlags, ({ params }) => flags.list(params.trialId));
}
