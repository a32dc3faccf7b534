import { listDevices, registerDevice, revokeDevice } from '@shared/api/rigs';
import { type ApiRouter, serve } from '../../http';
import type { DeviceService } from './service';

export function deviceRoutes(router: ApiRouter, devices: DeviceService): void {
  serve(router, listDevices, async () => ({ devices: await devices.list() }));
  serve(router, registerDevice, async ({ body, note }) => {
    const made = await devices.register(body.name, body.rigId);
    note({ subject: made.device.id, detail: { name: made.device.name, rig: made.device.rigCode } });
    return made;
  });
  serve(router, revokeDevice, async ({ params, note }) => {
    const revoked = await devices.revoke(params.deviceId);
    note({ detail: { name: revoked.name } });
    return revoked;
  });
}
