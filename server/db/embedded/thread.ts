/**
 * The embedded database from the server's side: the same calls as a PGlite, carried out in a thread of its own, so that
 * waiting for the disk never holds the event loop.
 *
 * It is one connection: a transaction has it alone until it ends. A thread that dies (PostgreSQL gave up) fails what was
 * asked of it and is started again by the next question; what was committed is on the disk.
 */
import { Worker } from 'node:worker_threads';
import type { Answer, Asked, FirstWord, QueryResult, Question } from './messages';

interface QueryOptions { readonly rowMode?: 'object' | 'array' }

/** What a transaction's work may do. */
export interface Asker {
  query(sql: string, params?: readonly unknown[], options?: QueryOptions): Promise<QueryResult>;
}

interface Pending {
  resolve(result: QueryResult | null): void;
  reject(error: Error): void;
}

const nothing: QueryResult = { rows: [], fields: [] };

export class EmbeddedThread implements Asker {
  private worker: Promise<Worker> | null = null;
  private readonly pending = new Map<number, Pending>();
  private nextId = 0;
  private turn: Promise<unknown> = Promise.resolve();
  private closed = false;

  private constructor(private readonly directory: string) {}

  /** @throws what keeps the database from opening, with what the file system said about it */
  static async open(directory: string): Promise<EmbeddedThread> {
    const thread = new EmbeddedThread(directory);
    await thread.started();
    return thread;
  }

  query(sql: string, params: readonly unknown[] = [], { rowMode = 'object' }: QueryOptions = {}): Promise<QueryResult> {
    return this.alone(() => this.ask({ ask: 'query', sql, params, rowMode }));
  }

  transaction<Result>(work: (asker: Asker) => Promise<Result>): Promise<Result> {
    const say = (sql: string) => this.ask({ ask: 'query', sql, params: [], rowMode: 'object' });
    return this.alone(async () => {
      await say('begin');
      try {
        const result = await work({ query: (sql, params = [], { rowMode = 'object' } = {}) => this.ask({ ask: 'query', sql, params, rowMode }) });
        await say('commit');
        return result;
      } catch (error) {
        await say('rollback').catch(() => undefined); // the thread is gone, and the transaction with it
        throw error;
      }
    });
  }

  async close(): Promise<void> {
    if (this.closed) return;
    await this.alone(() => this.ask({ ask: 'close' }));
    this.closed = true;
  }

  private alone<Result>(work: () => Promise<Result>): Promise<Result> {
    const mine = this.turn.then(work);
    this.turn = mine.catch(() => undefined);
    return mine;
  }

  private async ask(question: Question): Promise<QueryResult> {
    if (this.closed) throw new Error('The database is closed.');
    const worker = await this.started();
    const id = (this.nextId += 1);
    const [sent, handed] = compact(question);
    const answered = new Promise<QueryResult | null>((resolve, reject) => this.pending.set(id, { resolve, reject }));
    worker.postMessage({ id, question: sent } satisfies Asked, handed);
    return (await answered) ?? nothing;
  }

  private started(): Promise<Worker> {
    this.worker ??= this.start();
    return this.worker;
  }

  private start(): Promise<Worker> {
    const worker = new Worker(new URL('./worker-start.mjs', import.meta.url), { workerData: { directory: this.directory } });
    return new Promise((resolve, reject) => {
      const ended = (reason: string): void => {
        this.worker = null;
        const error = new Error(`The thread of the embedded database ended: ${reason}`);
        reject(error);
        for (const { reject: fail } of this.pending.values()) fail(error);
        this.pending.clear();
      };
      worker.on('error', (error) => ended(error instanceof Error ? error.message : String(error)));
      worker.on('exit', (code) => ended(`exit ${code}`));
      worker.once('message', (first: FirstWord) => {
        if (!first.open) return reject(Object.assign(new Error(first.fault), first.about));
        worker.on('message', (answer: Answer) => this.take(answer));
        resolve(worker);
      });
    });
  }

  private take(answer: Answer): void {
    const waiting = this.pending.get(answer.id);
    this.pending.delete(answer.id);
    if ('fault' in answer) waiting?.reject(Object.assign(new Error(answer.fault), answer.about));
    else waiting?.resolve(answer.result);
  }
}

/** Bytes are copied once and handed over: a view into something larger would take the whole of it along. */
function compact(question: Question): [Question, ArrayBuffer[]] {
  if (question.ask !== 'query') return [question, []];
  const handed: ArrayBuffer[] = [];
  const params = question.params.map((value) => {
    if (!(value instanceof Uint8Array)) return value;
    const copy = new Uint8Array(value);
    handed.push(copy.buffer);
    return copy;
  });
  return [{ ...question, params }, handed];
}
