/** The door for devices: `GET /link/v1`, one connection a device, and what the session pages ask of devices. */
import { createHash } from 'node:crypto';
import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import { WebSocketServer } from 'ws';
import type { DeviceId } from '@shared/api/common';
import { type FaultCode, faultKinds, LINK_PROTOCOL, type LinkOptions, linkOptions } from '@shared/link';
import { Connection } from './connection';
import { DeviceRecord } from './device-record';
import { faultText } from './fault-text';
import type { DeviceControl } from './ports';
import { type DeviceRow, findDeviceByKey } from './queries';
import { Recorder, type RecorderParts } from './recorder';

export interface DeviceLink extends DeviceControl {
  handleUpgrade(req: IncomingMessage, socket: Duplex, head: Buffer): void;
  /** Makes durable what has arrived; devices keep what is not acknowledged. */
  close(): Promise<void>;
}

/** Takes up the runs that were growing when the server stopped, then opens the door. */
export async function createDeviceLink(parts: Omit<RecorderParts, 'options'> & { options?: Partial<LinkOptions> }): Promise<DeviceLink> {
  const options = linkOptions(parts.options);
  const all: RecorderParts = { ...parts, options };
  const recorder = new Recorder(all);
  await recorder.start();
  const connections = new Map<DeviceId, Connection>();
  const sockets = new WebSocketServer({ noServer: true, maxPayload: options.ceilingBytes, perMessageDeflate: false, handleProtocols: () => LINK_PROTOCOL });

  function counted(device: DeviceRow, code: FaultCode): FaultCode {
    const record = new DeviceRecord(device, parts.db, parts.log);
    record.fault(code);
    void record.write();
    return code;
  }

  async function admit(req: IncomingMessage): Promise<DeviceRow | FaultCode> {
    const protocols = (req.headers['sec-websocket-protocol'] ?? '').split(',').map((name) => name.trim());
    const bearer = /^Bearer ([\w.~+/=-]{1,200})$/i.exec(req.headers.authorization ?? '')?.[1];
    if (bearer === undefined) return 'KEY_UNKNOWN';
    const device = await findDeviceByKey(parts.db, createHash('sha256').update(bearer).digest('hex'));
    if (device === null) return 'KEY_UNKNOWN';
    if (device.revokedAt !== null) return counted(device, 'KEY_REVOKED');
    if (!protocols.includes(LINK_PROTOCOL)) return 'LINK_VERSION';
    const older = connections.get(device.id as DeviceId);
    if (older === undefined) return device;
    // The older connection may be a dead one that nobody told us about: it has a moment to prove itself.
    if (await older.answers(options.busyPingMs)) {
      older.count('DEVICE_BUSY');
      return 'DEVICE_BUSY';
    }
    await older.terminate();
    return device;
  }

  function open(device: DeviceRow, req: IncomingMessage, socket: Duplex, head: Buffer): void {
    const id = device.id as DeviceId;
    if (connections.has(id)) return refuse(socket, 'DEVICE_BUSY');
    sockets.handleUpgrade(req, socket, head, (ws) => {
      connections.set(id, new Connection(ws, device, recorder, all, (closed) => {
        if (connections.get(id) === closed) connections.delete(id);
      }));
    });
  }

  return {
    handleUpgrade(req, socket, head) {
      socket.on('error', () => socket.destroy());
      admit(req).then(
        (answer) => (typeof answer === 'string' ? refuse(socket, answer) : open(answer, req, socket, head)),
        (error: unknown) => {
          parts.log.error({ message: faultText(error) }, 'a device could not be let in');
          refuse(socket, 'STORAGE');
        },
      );
    },

    stateOf(deviceId) {
      const connection = connections.get(deviceId);
      if (connection?.state !== 'streaming') return 'gone';
      return connection.streams.length > 0 ? 'recording' : 'connected';
    },
    rigOf: (deviceId) => connections.get(deviceId)?.announced?.rig ?? null,

    arm(deviceId, trial) {
      const connection = connections.get(deviceId);
      if (connection?.state !== 'streaming') return 'gone';
      if (connection.streams.length > 0) return 'busy';
      connection.send({ type: 'arm', trial });
      return 'sent';
    },
    disarm: (deviceId, trial) => connections.get(deviceId)?.send({ type: 'disarm', trial }),
    stop(trial) {
      const run = recorder.ofTrial(trial);
      if (run === undefined) return 'not-recording';
      const connection = connections.get(run.deviceId);
      if (connection?.state !== 'streaming') return 'gone';
      // A device that came back without going on with the run has forgotten it: nobody else will end it.
      if (run.by !== connection) recorder.end(run, 'lost');
      else connection.send({ type: 'stop', run: run.run });
      return 'sent';
    },
    revoke: (deviceId) => connections.get(deviceId)?.fault('KEY_REVOKED'),

    async close() {
      await Promise.all([...connections.values()].map((connection) => connection.terminate(true)));
      sockets.close();
      await recorder.stop();
    },
  };
}

/** A refused upgrade answers in HTTP, on the raw socket. */
function refuse(socket: Duplex, code: FaultCode): void {
  const { status = 503, sentence, wayOut } = faultKinds[code];
  const titles: Record<number, string> = { 401: 'Unauthorized', 403: 'Forbidden', 409: 'Conflict', 426: 'Upgrade Required', 503: 'Service Unavailable' };
  const body = JSON.stringify({ type: `urn:tautbook:problem:${code}`, title: titles[status], status, detail: sentence, code, wayOut });
  const more = status === 401 ? 'WWW-Authenticate: Bearer\r\n' : status === 426 ? `Upgrade: websocket\r\nSec-WebSocket-Protocol: ${LINK_PROTOCOL}\r\n` : '';
  socket.end(`HTTP/1.1 ${status} ${titles[status] ?? ''}\r\nContent-Type: application/problem+json\r\nContent-Length: ${Buffer.byteLength(body)}\r\n${more}Connection: close\r\n\r\n${body}`);
}
