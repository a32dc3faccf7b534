/** The address that people type, known for sure only once the server listens. */
import type { AddressInfo } from 'node:net';
import type { Config } from './config';

const everywhere = new Set(['0.0.0.0', '::', '']);
const inUrl = (host: string) => (everywhere.has(host) ? 'localhost' : host.includes(':') ? `[${host}]` : host);

export class PublicAddress {
  private port: number;

  constructor(private readonly config: Pick<Config, 'host' | 'port' | 'publicUrl'>) {
    this.port = config.port;
  }

  listensOn(address: AddressInfo): void {
    this.port = address.port;
  }

  /** Without a slash at the end. */
  get url(): string {
    return this.config.publicUrl ?? `http://${inUrl(this.config.host)}:${this.port}`;
  }
}
