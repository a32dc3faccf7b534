/**
 * Durable commits for the embedded database.
 *
 * PGlite starts Postgres with fsync off, and its file system maps fsync to nothing. Here the virtual file system's
 * fsync reaches the operating system's, and the start parameters leave fsync on. `wal_sync_method` has to be `fsync`,
 * because `fdatasync` stays a stub.
 */
import { fsyncSync } from 'node:fs';
import { PGlite, type PGliteOptions } from '@electric-sql/pglite';
import { NodeFS } from '@electric-sql/pglite/nodefs';

type InitOptions = Parameters<NodeFS['init']>[1];

/** The part of Emscripten's module that is reached into: a stream of NODEFS carries the host's file descriptor. */
interface NodeFsModule {
  NODEFS: { stream_ops: { fsync?: (stream: { nfd: number }) => number } };
}

class DurableNodeFs extends NodeFS {
  override async init(pg: PGlite, opts: InitOptions): Promise<{ emscriptenOpts: InitOptions }> {
    const { emscriptenOpts } = await super.init(pg, opts);
    const makeFsyncReal = (module: unknown) => {
      (module as NodeFsModule).NODEFS.stream_ops.fsync = ({ nfd }) => {
        fsyncSync(nfd);
        return 0;
      };
    };
    return { emscriptenOpts: { ...emscriptenOpts, preRun: [...(emscriptenOpts.preRun ?? []), makeFsyncReal] } };
  }
}

/** Options that make a PGlite on `directory` keep what it committed through a power cut. */
export function durableOptions(directory: string): PGliteOptions {
  return {
    fs: new DurableNodeFs(directory),
    startParams: PGlite.defaultStartParams.filter((parameter) => parameter !== '-F'),
    postgresqlconf: ['wal_sync_method = fsync'],
  };
}
