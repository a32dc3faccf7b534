import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  DEVICE_UNKNOWN: { status: 404, sentence: 'There is no such device.', wayOut: 'Reload the list of devices.' },
  DEVICE_RIG: { status: 422, sentence: 'There is no such rig to register the device for.', wayOut: 'Import the rig first.' },
});
