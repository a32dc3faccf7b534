import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { createGzip } from 'node:zlib';
import { exportCsv, getWindow, importRecording } from '@shared/api/recordings';
import { pack } from '@shared/link';
import { type ApiRouter, serve } from '../../http';
import type { ImportService } from './import-service';
import type { RecordingService } from './service';

export function recordingRoutes(router: ApiRouter, recordings: RecordingService, imports: ImportService): void {
  serve(router, getWindow, async ({ params, query, request, response }) => {
    const { body, tag } = await recordings.window(params.recordingId, query);
    // Closed recordings never change; still private, because who may see them can.
    response.set('Cache-Control', tag === null ? 'no-store' : 'private, max-age=31536000, immutable');
    if (tag !== null) response.set('ETag', tag);
    if (tag !== null && request.headers['if-none-match'] === tag) response.status(304).end();
    else response.type('application/vnd.msgpack').send(Buffer.from(pack(body)));
    return undefined;
  });

  serve(router, importRecording, async ({ params, query, person, request, response, note }) => {
    const leaving = new AbortController();
    response.once('close', () => leaving.abort());
    note({ detail: { fileName: query.fileName } });
    // Faults of the file are answered before anything is stored; from then on each line says how far it is.
    const lines = await imports.begin(params.trialId, request, query, person, leaving.signal);
    response.type('application/x-ndjson').set('Cache-Control', 'no-store');
    for await (const line of lines) response.write(`${JSON.stringify(line)}\n`);
    response.end();
    return undefined;
  });

  serve(router, exportCsv, async ({ params, query, response }) => {
    const { name, pieces } = await recordings.csv(params.trialId);
    response.set('Cache-Control', 'no-store');
    if (query.gz === '1') {
      response.type('application/gzip').attachment(`${name}.gz`);
      await pipeline(Readable.from(pieces), createGzip(), response);
    } else {
      response.type('text/csv; charset=utf-8').attachment(name);
      await pipeline(Readable.from(pieces), response);
    }
    return undefined;
  });
}
