/** Who is in which room, and what is told there. A viewer whose socket is slow is skipped, never waited for. */
import type { IncomingMessage } from 'node:http';
import type { WebSocket } from 'ws';
import type { PersonRef, SessionId, TrialId } from '@shared/api/common';
import type { LiveFromServer } from '@shared/api/live';
import type { Note } from '@shared/api/notes';
import type { SignedIn } from '../auth';
import type { Bus, LiveFlag } from './bus';
import { Thinner } from './thinner';

export interface Viewer {
  readonly socket: WebSocket;
  /** With what it came in: who they are is asked again. */
  readonly request: IncomingMessage;
  /** As last looked at. */
  person: SignedIn;
  readonly rooms: Set<string>;
  /** One after another: a leave that was sent after a join must not overtake it. */
  inOrder(work: () => Promise<void> | void): void;
}

/** Bytes that may wait in a viewer's socket; above it sample frames are left out until it has caught up. */
const SLOW_BYTES = 256 * 1024;
/** Above it even words are left out, and the viewer is let go: it comes back and asks again. */
const STUCK_BYTES = 8 * 1024 * 1024;
const FRAME_EVERY_MS = 33;

const refOf = ({ id, name }: SignedIn): PersonRef => ({ id, name });

export interface RoomsParts {
  bus: Bus;
  /** A note as one person sees it; null when it is gone. */
  noteFor(noteId: string, person: SignedIn): Promise<Note | null>;
  onFault(error: unknown): void;
}

export class Rooms {
  private readonly members = new Map<string, Set<Viewer>>();
  private readonly thinners = new Map<TrialId, Thinner>();
  private readonly sessionOf = new Map<TrialId, SessionId>();
  private readonly flags = new Map<TrialId, readonly LiveFlag[]>();
  private readonly stop: (() => void)[] = [];
  private readonly timer: NodeJS.Timeout;

  constructor(private readonly parts: RoomsParts) {
    const { bus } = parts;
    this.stop.push(
      bus.on('samples', (event) => this.samples(event)),
      bus.on('liveFlags', ({ trialId, flags }) => {
        this.flags.set(trialId, flags);
        this.tellTrial(trialId, (room) => this.flagsMessage(room, trialId, flags));
      }),
      bus.on('mark', ({ trialId, atS, label }) => this.tellTrial(trialId, (room) => ({ type: 'mark', room, trialId, atS, label }))),
      bus.on('trial', ({ trialId, sessionId, state }) => {
        this.sessionOf.set(trialId, sessionId);
        const over = state === 'stopped' || state === 'judged';
        // The last samples go out before the trial is forgotten: its end is what viewers look at.
        if (over) this.frame(trialId);
        this.tellTrial(trialId, (room) => ({ type: 'trial', room, trialId, state }));
        if (over) this.forget(trialId);
      }),
      bus.on('session', ({ sessionId }) => this.tell(`session:${sessionId}`, { type: 'session', room: `session:${sessionId}`, sessionId })),
      bus.on('flagsFound', ({ trialId }) => this.tellTrial(trialId, (room) => ({ type: 'found', room, trialId }))),
      bus.on('verdicts', ({ studyId, trialId }) => {
        for (const room of [`study:${studyId}`, `trial:${trialId}`]) this.tell(room, { type: 'verdicts', room, trialId });
      }),
      bus.on('device', ({ deviceId, state }) => this.tell('devices', { type: 'device', room: 'devices', deviceId, state })),
      bus.on('note', ({ trialId, noteId }) => void this.note(`trial:${trialId}`, noteId)),
    );
    this.timer = setInterval(() => this.frames(), FRAME_EVERY_MS);
    this.timer.unref();
  }

  /** @returns those present, for the one who joined */
  join(viewer: Viewer, room: string): void {
    const inside = this.members.get(room) ?? new Set();
    this.members.set(room, inside);
    inside.add(viewer);
    viewer.rooms.add(room);
    send(viewer, { type: 'joined', room, present: this.present(room) });
    this.tellPresence(room, viewer);
    const trial = [...this.flags].find(([id]) => room === `trial:${id}` || room === `session:${this.sessionOf.get(id)}`);
    if (trial) send(viewer, this.flagsMessage(room, trial[0], trial[1]));
  }

  leave(viewer: Viewer, room: string): void {
    const inside = this.members.get(room);
    if (!inside?.delete(viewer)) return;
    viewer.rooms.delete(room);
    if (inside.size === 0) this.members.delete(room);
    else this.tellPresence(room, viewer);
  }

  leaveAll(viewer: Viewer): void {
    for (const room of [...viewer.rooms]) this.leave(viewer, room);
  }

  reading(viewer: Viewer, room: string, atS: number): void {
    if (!viewer.rooms.has(room)) return;
    const message: LiveFromServer = { type: 'reading', room, who: refOf(viewer.person), atS };
    for (const other of this.members.get(room) ?? []) if (other.person.id !== viewer.person.id) send(other, message);
  }

  close(): void {
    clearInterval(this.timer);
    this.stop.forEach((end) => end());
  }

  /** One entry a person, however many windows they have open. */
  private present(room: string): PersonRef[] {
    const byId = new Map([...(this.members.get(room) ?? [])].map(({ person }) => [person.id, refOf(person)]));
    return [...byId.values()].sort((a, b) => a.name.localeCompare(b.name));
  }

  private tellPresence(room: string, except: Viewer): void {
    const message: LiveFromServer = { type: 'present', room, present: this.present(room) };
    for (const other of this.members.get(room) ?? []) if (other !== except) send(other, message);
  }

  private tell(room: string, message: LiveFromServer): void {
    for (const viewer of this.members.get(room) ?? []) send(viewer, message);
  }

  private roomsOf(trialId: TrialId): string[] {
    const session = this.sessionOf.get(trialId);
    return session === undefined ? [`trial:${trialId}`] : [`trial:${trialId}`, `session:${session}`];
  }

  private tellTrial(trialId: TrialId, message: (room: string) => LiveFromServer): void {
    for (const room of this.roomsOf(trialId)) this.tell(room, message(room));
  }

  private flagsMessage(room: string, trialId: TrialId, flags: readonly LiveFlag[]): LiveFromServer {
    return { type: 'flags', room, trialId, flags: flags.map(({ kind, cable, startS, endS, peak, severity, open }) => ({ kind, cable: cable ?? null, startS, endS, peak: peak ?? null, severity: severity ?? null, open })) };
  }

  private samples(event: Parameters<Thinner['push']>[0]): void {
    let thinner = this.thinners.get(event.trialId);
    if (thinner === undefined) this.thinners.set(event.trialId, (thinner = new Thinner()));
    thinner.push(event);
  }

  private frames(): void {
    for (const trialId of this.thinners.keys()) this.frame(trialId);
  }

  private frame(trialId: TrialId): void {
    const thinner = this.thinners.get(trialId);
    if (thinner === undefined) return;
    const viewers = new Set(this.roomsOf(trialId).flatMap((room) => [...(this.members.get(room) ?? [])]));
    if (viewers.size === 0) return;
    const frame = thinner.frame();
    if (frame === null) return;
    for (const { socket } of viewers) if (socket.readyState === socket.OPEN && socket.bufferedAmount < SLOW_BYTES) socket.send(frame);
  }

  private async note(room: string, noteId: string): Promise<void> {
    for (const viewer of [...(this.members.get(room) ?? [])]) {
      try {
        const note = await this.parts.noteFor(noteId, viewer.person);
        if (note !== null && viewer.rooms.has(room)) send(viewer, { type: 'note', room, note });
      } catch (error) {
        this.parts.onFault(error);
      }
    }
  }

  private forget(trialId: TrialId): void {
    this.thinners.delete(trialId);
    this.flags.delete(trialId);
  }
}

export function send({ socket }: Pick<Viewer, 'socket'>, message: LiveFromServer): void {
  if (socket.readyState !== socket.OPEN) return;
  if (socket.bufferedAmount > STUCK_BYTES) socket.terminate();
  else socket.send(JSON.stringify(message));
}
