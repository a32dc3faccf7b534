/** Taking the port, or saying why it cannot be had. */
import { type AddressInfo, createServer, type Server } from 'node:net';
import type { Config } from './config';
import { StartRefusal } from './start-refusal';

type Place = Pick<Config, 'host' | 'port'>;

/** @throws StartRefusal PORT_BUSY or CONFIG */
export function listenOn(server: Server, { host, port }: Place): Promise<AddressInfo> {
  return new Promise((resolve, reject) => {
    server.once('error', (error: NodeJS.ErrnoException) => {
      if (error.code === 'EADDRINUSE') reject(new StartRefusal('PORT_BUSY', `Another program already listens on port ${port} of ${host}.`, `Stop it, or choose another port: PORT=${port + 1}.`, { cause: error }));
      else if (error.code === 'EACCES') reject(new StartRefusal('CONFIG', `This user cannot listen on port ${port} of ${host}.`, 'Choose a PORT above 1023.', { cause: error }));
      else if (error.code === 'EADDRNOTAVAIL' || error.code === 'ENOTFOUND') reject(new StartRefusal('CONFIG', `This machine has no address ${host} to listen on.`, 'Choose another HOST; 0.0.0.0 is every address of this machine.', { cause: error }));
      else reject(error);
    });
    server.listen(port, host, () => resolve(server.address() as AddressInfo));
  });
}

/** Looks before long work begins. @throws StartRefusal PORT_BUSY or CONFIG */
export async function requireFreePort(place: Place): Promise<void> {
  const probe = createServer();
  await listenOn(probe, place);
  await new Promise((resolve) => probe.close(resolve));
}
