/** Finds the flags of one recording in the worker thread, a few chunks at a time, so that memory stays flat. */
import { Worker } from 'node:worker_threads';
import type { Flag } from '@shared/flags';
import type { WorkerAnswer, WorkerQuestion } from './flag-worker';

const CHUNKS_A_MESSAGE = 16;

export class FlagFinder {
  private worker: Worker | null = null;

  /** One recording at a time: the caller waits for the answer before the next. */
  async find(about: Omit<Extract<WorkerQuestion, { ask: 'open' }>, 'ask'>, chunks: AsyncIterable<Uint8Array>): Promise<Flag[]> {
    await this.ask({ ask: 'open', ...about });
    const flags: Flag[] = [];
    let held: Uint8Array[] = [];
    for await (const chunk of chunks) {
      held.push(Uint8Array.from(chunk)); // a copy of its own: the database's buffers are shared
      if (held.length < CHUNKS_A_MESSAGE) continue;
      flags.push(...await this.ask({ ask: 'chunks', chunks: held }));
      held = [];
    }
    if (held.length > 0) flags.push(...await this.ask({ ask: 'chunks', chunks: held }));
    flags.push(...await this.ask({ ask: 'finish' }));
    return flags;
  }

  async close(): Promise<void> {
    await this.worker?.terminate();
    this.worker = null;
  }

  private start(): Worker {
    const worker = new Worker(new URL('./flag-worker-start.mjs', import.meta.url));
    worker.unref();
    this.worker = worker;
    return worker;
  }

  private ask(question: WorkerQuestion): Promise<readonly Flag[]> {
    const worker = this.worker ?? this.start();
    return new Promise((resolve, reject) => {
      const done = () => {
        worker.off('message', answered);
        worker.off('error', failed);
        worker.off('exit', ended);
      };
      const answered = (answer: WorkerAnswer) => {
        done();
        if ('fault' in answer) reject(new Error(answer.fault));
        else resolve(answer.flags);
      };
      const failed = (error: unknown) => {
        done();
        this.worker = null;
        reject(error instanceof Error ? error : new Error(String(error)));
      };
      const ended = () => failed(new Error('The worker thread ended'));
      worker.on('message', answered);
      worker.on('error', failed);
      worker.on('exit', ended);
      worker.postMessage(question);
    });
  }
}
