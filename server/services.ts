/** The features' services, put together once: the app serves them over HTTP, seed and tests call them directly. */
import type { Logger } from 'pino';
import { createSignIn, type SignInDesk } from './auth';
import type { Config } from './config';
import type { Database } from './db/engine';
import { createDeviceService, type DeviceService } from './features/devices';
import { createFlagService, type FlagService } from './features/flags';
import { createLabService, type LabService } from './features/lab';
import { createNoteService, type NoteService } from './features/notes';
import { createPeopleService, type DemoSignIn, type PeopleService } from './features/people';
import { createImportService, createRecordingService, type ImportService, type RecordingService } from './features/recordings';
import { createReviewService, type ReviewService } from './features/review';
import { createRigService, type RigService } from './features/rigs';
import { createSessionReader, createSessionService, type SessionReader, type SessionService } from './features/sessions';
import { createStudyService, type StudyService } from './features/studies';
import type { DeviceControl } from './ingest/ports';
import type { Bus } from './live/bus';
import { createPost, type Post } from './mail';

export interface Services {
  desk: SignInDesk;
  post: Post;
  people: PeopleService;
  lab: LabService;
  rigs: RigService;
  devices: DeviceService;
  studies: StudyService;
  sessions: SessionService;
  sessionReader: SessionReader;
  recordings: RecordingService;
  imports: ImportService;
  notes: NoteService;
  review: ReviewService;
  flags: FlagService;
}

export interface ServiceOptions {
  db: Database;
  bus: Bus;
  control: DeviceControl;
  log: Logger;
  config: Pick<Config, 'smtp' | 'mailFrom' | 'authSecret'>;
  /** Address that people type, without a slash at the end. */
  publicUrl: () => string;
  demo?: readonly DemoSignIn[] | undefined;
  now?: () => Date;
}

/** A lab in which no device is connected: while the demo lab is made, and in tests without devices. */
export const noDevices: DeviceControl = {
  stateOf: () => 'gone',
  rigOf: () => null,
  arm: () => 'gone',
  disarm: () => undefined,
  stop: () => 'gone',
  revoke: () => undefined,
};

export async function createServices({ db, bus, control, log, config, publicUrl, demo, now = () => new Date() }: ServiceOptions): Promise<Services> {
  const post = createPost(db, config, log);
  const review = createReviewService({ db, bus, now });
  const sessions = createSessionService({ db, bus, control, now });
  const desk = await createSignIn({ db, post, log, authSecret: config.authSecret, publicUrl });
  return {
    desk,
    post,
    people: createPeopleService({ db, post, desk, publicUrl, demo: demo ?? null }),
    lab: createLabService(db, post),
    rigs: createRigService(db),
    devices: createDeviceService(db, control),
    studies: createStudyService(db),
    sessions,
    sessionReader: createSessionReader(db, now),
    recordings: createRecordingService(db),
    imports: createImportService({ db, sessions, now }),
    notes: createNoteService(db, bus, now),
    flags: createFlagService(db, review),
    review,
  };
}
