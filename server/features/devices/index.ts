export { deviceRoutes } from './routes';
export { createDeviceService, hashKey, type DeviceService } from './service';
