export { recordingRoutes } from './routes';
export { createImportService, type ImportService } from './import-service';
export { createRecordingService, type RecordingService } from './service';
