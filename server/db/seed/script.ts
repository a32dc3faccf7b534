/** What happened in the demo lab: sessions, the troubles of their trials, what people wrote. Days count from the day of the seed. */
import type { Outcome } from '@shared/api/sessions';
import type { TroubleWish } from '../../simulator';
import type { CastName } from './cast';

export interface SceneNote {
  by: CastName;
  /** Seconds of the recording, or the moment of the first trouble of a kind: a span around it. */
  at: number | { trouble: TroubleWish['kind'] };
  endS?: number;
  cables?: number[];
  text: string;
  replies?: { by: CastName; text: string }[];
  resolvedBy?: CastName;
}

export interface SceneTrial {
  task: string;
  condition: string;
  /** Absent: planned only. */
  run?: { seed: number; durationS: number; troubles: TroubleWish[]; outcome?: Outcome; reason?: string; notes?: SceneNote[] };
}

export interface SceneSession {
  participant: string;
  day: number;
  /** Wall time, UTC. */
  time: string;
  closed?: boolean;
  trials: SceneTrial[];
}

export interface SceneStudy {
  code: string;
  title: string;
  protocol: string;
  rig: 'heron-8' | 'wren-8';
  conditions: { blindCode: string; label: string }[];
  tasks: { code: string; title: string; timeLimitS: number | null }[];
  participants: { code: string; hand: 'left' | 'right' }[];
  members: { who: CastName; role: 'operator' | 'clinician'; blind: boolean }[];
  sessions: SceneSession[];
}

const kestrel: SceneStudy = {
  code: 'KESTREL',
  title: 'Kestrel reach study',
  protocol: 'Does a softer virtual plate change how people reach, press and let go? Two visits a participant, three conditions in balanced order, four tasks. '
    + 'A trial ends when the task is done or after its time limit. Participants may stop at any time without a reason.',
  rig: 'heron-8',
  conditions: [{ blindCode: 'A', label: 'soft plate' }, { blindCode: 'B', label: 'stiff plate' }, { blindCode: 'C', label: 'no plate' }],
  tasks: [
    { code: 'reach', title: 'Reach to the lit target', timeLimitS: 60 },
    { code: 'pick-and-place', title: 'Pick and place the block', timeLimitS: 60 },
    { code: 'press', title: 'Press and hold', timeLimitS: 45 },
    { code: 'trace', title: 'Trace the outline', timeLimitS: 60 },
  ],
  participants: ['K-011', 'K-012', 'K-013', 'K-014', 'K-015', 'K-016', 'K-017', 'K-018'].map((code, i) => ({ code, hand: i % 4 === 2 ? 'left' as const : 'right' as const })),
  members: [{ who: 'operator', role: 'operator', blind: false }, { who: 'secondOperator', role: 'operator', blind: true }, { who: 'clinician', role: 'clinician', blind: false }],
  sessions: [
    {
      participant: 'K-014', day: -6, time: '09:00', closed: true,
      trials: [
        {
          task: 'pick-and-place', condition: 'A',
          run: {
            seed: 3101, durationS: 40, outcome: 'completed', troubles: [{ kind: 'slack', cable: 4 }, { kind: 'saturation' }, { kind: 'gap' }, { kind: 'slack', cable: 7 }],
            notes: [
              { by: 'operator', at: { trouble: 'saturation' }, text: 'Participant leaned on the handle here. The push-back went soft, they noticed.', replies: [{ by: 'lead', text: 'Seen. The cable was at its limit for all of it; keep the trial, it is what we want to know.' }], resolvedBy: 'lead' },
              { by: 'secondOperator', at: 13, endS: 15, text: 'Second grasp is hesitant, the block turns in the jaws. Compare with the stiff plate.', cables: [3, 6] },
              { by: 'lead', at: { trouble: 'slack' }, text: 'Is the pretension of this cable as after the last calibration?' },
            ],
          },
        },
        { task: 'reach', condition: 'B', run: { seed: 3102, durationS: 30, outcome: 'completed', troubles: [{ kind: 'slack' }], notes: [{ by: 'operator', at: 4.2, text: 'Asked to go slower after this reach.' }] } },
        { task: 'press', condition: 'C', run: { seed: 3103, durationS: 30, outcome: 'completed', troubles: [{ kind: 'saturation' }, { kind: 'pretension' }] } },
      ],
    },
    {
      participant: 'K-011', day: -2, time: '13:30', closed: true,
      trials: [
        {
          task: 'trace', condition: 'B',
          run: {
            seed: 3201, durationS: 30, outcome: 'completed', troubles: [{ kind: 'slip', atS: 18, cable: 3 }, { kind: 'slack', atS: 7 }],
            notes: [{ by: 'secondOperator', at: { trouble: 'slip' }, cables: [3], text: 'A click from the drum, then the length reading stays off. Drum checked after the trial.', replies: [{ by: 'operator', text: 'Set screw was loose; tightened.' }], resolvedBy: 'operator' }],
          },
        },
        { task: 'pick-and-place', condition: 'A', run: { seed: 3202, durationS: 35, outcome: 'completed', troubles: [{ kind: 'oscillation' }, { kind: 'gap' }], notes: [{ by: 'lead', at: { trouble: 'oscillation' }, text: 'Shaking by the controller, not the hand. Gains were lowered for the next visits.' }] } },
      ],
    },
    {
      participant: 'K-014', day: 0, time: '08:00',
      trials: [
        { task: 'reach', condition: 'B', run: { seed: 3301, durationS: 30, outcome: 'completed', troubles: [{ kind: 'slack', cable: 5 }], notes: [{ by: 'operator', at: 2, text: 'Warm-up reach, smoother than last visit.' }] } },
        { task: 'pick-and-place', condition: 'C', run: { seed: 3302, durationS: 35, troubles: [{ kind: 'saturation' }, { kind: 'slack' }] } },
        { task: 'press', condition: 'A' },
        { task: 'reach', condition: 'C' },
        { task: 'trace', condition: 'A' },
      ],
    },
    { participant: 'K-016', day: 0, time: '15:00', trials: [{ task: 'reach', condition: 'A' }, { task: 'press', condition: 'B' }, { task: 'trace', condition: 'C' }] },
    { participant: 'K-012', day: 1, time: '09:30', trials: [{ task: 'reach', condition: 'C' }, { task: 'pick-and-place', condition: 'B' }, { task: 'press', condition: 'A' }] },
  ],
};

const tern: SceneStudy = {
  code: 'TERN',
  title: 'Tern grasp study',
  protocol: 'How firmly do people hold a virtual block when it may slip? One visit, two conditions. The hinge jaws give the grasp force.',
  rig: 'wren-8',
  conditions: [{ blindCode: 'P', label: 'dry block' }, { blindCode: 'Q', label: 'wet block' }],
  tasks: [{ code: 'pick-and-place', title: 'Lift, hold and set down', timeLimitS: 60 }, { code: 'press', title: 'Press and hold', timeLimitS: 45 }],
  participants: ['T-101', 'T-102', 'T-103', 'T-104'].map((code) => ({ code, hand: 'right' as const })),
  members: [{ who: 'operator', role: 'operator', blind: true }],
  sessions: [
    {
      participant: 'T-101', day: -4, time: '10:00', closed: true,
      trials: [
        { task: 'pick-and-place', condition: 'P', run: { seed: 4101, durationS: 30, outcome: 'completed', troubles: [{ kind: 'slack' }, { kind: 'saturation' }], notes: [{ by: 'operator', at: 11.5, endS: 13, text: 'Holds the block longer than asked.' }] } },
        { task: 'press', condition: 'Q', run: { seed: 4102, durationS: 20, outcome: 'void', reason: 'The wrong block was loaded.', troubles: [{ kind: 'gap' }] } },
      ],
    },
    { participant: 'T-102', day: 2, time: '10:00', trials: [{ task: 'pick-and-place', condition: 'Q' }, { task: 'pick-and-place', condition: 'P' }, { task: 'press', condition: 'P' }] },
  ],
};

export const script: readonly SceneStudy[] = [kestrel, tern];
