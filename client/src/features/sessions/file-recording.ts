/**
 * Sends a recording file and tells how far it is. XMLHttpRequest, because fetch tells nothing of an upload's progress.
 */
import { importLine, importRecording, type ImportLine } from '@shared/api/recordings';
import { problem } from '@shared/api/common';
import type { TrialId } from '@shared/api/common';
import { addressOf } from '../../lib/api';
import { ApiProblem, networkProblem, unreadableProblem } from '../../lib/api-problem';

export type FilingProgress = { readonly step: 'sending' | 'storing'; readonly share: number };
export type Filed = Extract<ImportLine, { state: 'done' }>;

export interface FilingInput {
  readonly trialId: TrialId;
  readonly file: File;
  /** Wall time of the first sample; null: not known. */
  readonly startedAt: string | null;
  readonly signal: AbortSignal;
  readonly onProgress: (progress: FilingProgress) => void;
}

/** @throws ApiProblem; the signal's abort error when it was taken back */
export function fileRecording({ trialId, file, startedAt, signal, onProgress }: FilingInput): Promise<Filed> {
  return new Promise((resolve, reject) => {
    const request = new XMLHttpRequest();
    let last: ImportLine | null = null;
    let read = 0;
    const readLines = () => {
      const text = request.responseText;
      const end = text.lastIndexOf('\n') + 1;
      for (const line of text.slice(read, end).split('\n').filter(Boolean)) {
        const parsed = importLine.safeParse(parse(line));
        if (!parsed.success) continue;
        last = parsed.data;
        if (last.state === 'storing') onProgress({ step: 'storing', share: last.of === 0 ? 0 : last.samples / last.of });
      }
      read = end;
    };
    request.open(importRecording.method, addressOf(importRecording, { params: { trialId }, query: { fileName: file.name, startedAt: startedAt ?? undefined } }));
    request.setRequestHeader('content-type', /\.gz$/i.test(file.name) ? 'application/gzip' : 'text/csv');
    request.upload.onprogress = ({ loaded, total }) => onProgress({ step: 'sending', share: total === 0 ? 0 : loaded / total });
    request.onprogress = () => {
      if (request.status === 200) readLines();
    };
    request.onload = () => {
      if (request.status !== 200) return reject(refused(request));
      readLines();
      if (last?.state === 'done') resolve(last);
      else if (last?.state === 'failed') reject(new ApiProblem(last.problem));
      else reject(unreadableProblem(200));
    };
    request.onerror = () => reject(networkProblem());
    request.onabort = () => reject(signal.reason instanceof Error ? signal.reason : new DOMException('Taken back', 'AbortError'));
    signal.addEventListener('abort', () => request.abort(), { once: true });
    request.send(file);
  });
}

function parse(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return null;
  }
}

function refused(request: XMLHttpRequest): ApiProblem {
  const parsed = problem.safeParse(parse(request.responseText));
  return parsed.success ? new ApiProblem(parsed.data) : unreadableProblem(request.status);
}
