import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { exportCsv, getWindow } from '@shared/api/recordings';
import { pack } from '@shared/link';
import { type ApiRouter, serve } from '../../http';
import type { RecordingService } from './service';

export function recordingRoutes(router: ApiRouter, recordings: RecordingService): void {
  serve(router, getWindow, async ({ params, query, request, response }) => {
    const { body, tag } = await recordings.window(params.recordingId, query);
    // Closed recordings never change; still private, because who may see them can.
    response.set('Cache-Control', tag === null ? 'no-store' : 'private, max-age=31536000, immutable');
    if (tag !== null) response.set('ETag', tag);
    if (tag !== null && request.headers['if-none-match'] === tag) response.status(304).end();
    else response.type('application/vnd.msgpack').send(Buffer.from(pack(body)));
    return undefined;
  });

  serve(router, exportCsv, async ({ params, response }) => {
    const { name, pieces } = await recordings.csv(params.trialId);
    response.type('text/csv; charset=utf-8').attachment(name).set('Cache-Control', 'no-store');
    await pipeline(Readable.from(pieces), response);
    return undefined;
  });
}
