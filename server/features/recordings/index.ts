export { recordingRoutes } from './routes';
export { createRecordingService, type RecordingService } from './service';
