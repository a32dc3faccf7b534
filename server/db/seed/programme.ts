/**
 * What happened in the demo lab: studies, participants, visits, trials with their troubles, and what people wrote.
 *
 * Days count from the day of seeding; hours are of the server's own clock. A note stands at a trouble of its
 * trial (`at`) or at a second (`atS`).
 */
import type { TroubleWish } from '../../simulator';
import type { CastName } from './cast';

export type DemoNote = {
  by: CastName;
  text: string;
  at?: { kind: 'slack' | 'saturation' | 'gap' | 'slip' | 'oscillation'; nth?: number };
  atS?: number;
  /** On the span of the trouble, or of so many seconds. */
  span?: boolean | number;
  cables?: boolean;
  replies?: readonly { by: CastName; text: string }[];
  resolvedBy?: CastName;
};

export type DemoTrial = {
  task: string;
  condition: string;
  /** Absent: planned, not recorded. */
  run?: {
    seed: number;
    durationS: number;
    troubles: readonly TroubleWish[];
    outcome?: { outcome: 'completed' | 'aborted' | 'void'; reason?: string };
    notes?: readonly DemoNote[];
  };
};

export type DemoSession = {
  participant: string;
  rig: { code: 'heron-8' | 'wren-8'; revision: number };
  by: CastName;
  when: { day: number; hour: number } | { fromNowH: number };
  closed?: boolean;
  trials: readonly DemoTrial[];
};

export type DemoStudy = {
  code: string;
  title: string;
  protocol: string;
  conditions: readonly { blindCode: string; label: string }[];
  tasks: readonly { code: string; title: string; timeLimitS: number | null }[];
  members: readonly { who: CastName; role: 'lead' | 'operator' | 'clinician' | 'reader'; blind: boolean }[];
  participants: readonly { code: string; hand: 'left' | 'right' | 'both' }[];
  sessions: readonly DemoSession[];
};

const heron2 = { code: 'heron-8', revision: 2 } as const;
const heron1 = { code: 'heron-8', revision: 1 } as const;
const wren = { code: 'wren-8', revision: 1 } as const;

const sedge: DemoStudy = {
  code: 'SEDGE',
  title: 'Sedge: does a softer grip limit change how blocks are carried?',
  protocol: 'Each participant makes two visits. Per visit four trials: two of picking and placing, one of pressing, one of free reaches. '
    + 'The grip limit is soft or firm, in an order balanced over participants. Pause of two minutes between trials.\n\n'
    + 'A trial in which a cable hangs slack for more than half a second is repeated once. Stop at once when the participant asks.',
  conditions: [{ blindCode: 'Q', label: 'Soft grip limit' }, { blindCode: 'R', label: 'Firm grip limit' }],
  tasks: [
    { code: 'pick-and-place', title: 'Pick a block and place it', timeLimitS: 60 },
    { code: 'press', title: 'Press the plate and hold', timeLimitS: 60 },
    { code: 'reach', title: 'Reach to shown targets', timeLimitS: 60 },
  ],
  members: [
    { who: 'lead', role: 'lead', blind: false },
    { who: 'operator', role: 'operator', blind: false },
    { who: 'secondOperator', role: 'operator', blind: true },
    { who: 'clinician', role: 'clinician', blind: false },
  ],
  participants: [
    { code: 'SG-01', hand: 'right' }, { code: 'SG-02', hand: 'right' }, { code: 'SG-03', hand: 'left' }, { code: 'SG-04', hand: 'right' },
    { code: 'SG-05', hand: 'right' }, { code: 'SG-06', hand: 'both' }, { code: 'SG-07', hand: 'right' },
  ],
  sessions: [
    {
      participant: 'SG-02', rig: heron1, by: 'operator', when: { day: -13, hour: 10 }, closed: true,
      trials: [{
        task: 'reach', condition: 'Q',
        run: {
          seed: 5201, durationS: 30, troubles: [{ kind: 'slack', cable: 6 }, { kind: 'oscillation' }],
          outcome: { outcome: 'completed' },
          notes: [
            {
              by: 'operator', at: { kind: 'oscillation' }, span: true, text: 'Audible hum from the frame, felt by the participant as a buzz. Exit pulleys to be measured again before the next visit.',
              replies: [{ by: 'lead', text: 'Measured on Friday: two pulleys had moved by half a millimetre. Imported as revision 2 of Heron.' }], resolvedBy: 'lead',
            },
          ],
        },
      }],
    },
    {
      participant: 'SG-03', rig: heron2, by: 'operator', when: { day: -4, hour: 9 }, closed: true,
      trials: [
        {
          task: 'pick-and-place', condition: 'R',
          run: {
            seed: 5302, durationS: 44, troubles: [{ kind: 'slack', cable: 3 }, { kind: 'saturation', cable: 6 }, { kind: 'gap' }],
            outcome: { outcome: 'completed' },
            notes: [
              {
                by: 'operator', at: { kind: 'saturation' }, span: true, cables: true, text: 'Participant pulled hard to the back right corner to free the block. The rig could not hold against it.',
                replies: [
                  { by: 'secondOperator', text: 'Same on my screen: one string capped for about a third of a second, the others fine.' },
                  { by: 'lead', text: 'Beyond what the limits allow, so not a fault of the rig. Keep the trial; I will look at the corner in the others.' },
                ],
              },
              { by: 'secondOperator', at: { kind: 'slack' }, cables: true, text: 'Short slack as the hand came back over the middle. Participant noticed nothing.', resolvedBy: 'lead' },
              { by: 'lead', at: { kind: 'gap' }, text: 'Samples missing on the device, hand at rest. Harmless for the placing times.' },
            ],
          },
        },
        {
          task: 'pick-and-place', condition: 'Q',
          run: {
            seed: 5303, durationS: 40, troubles: [{ kind: 'near-limit' }],
            outcome: { outcome: 'completed' },
            notes: [{ by: 'operator', atS: 2.4, span: 6, text: 'First block dropped short of the spot and nudged in; counted as placed.' }],
          },
        },
        {
          task: 'press', condition: 'R',
          run: {
            seed: 5304, durationS: 36, troubles: [{ kind: 'pretension' }, { kind: 'saturation', cable: 2 }],
            outcome: { outcome: 'completed' },
            notes: [
              {
                by: 'lead', at: { kind: 'slack' }, span: true, text: 'Several cables loose at once: pretension dipped. Is this the controller going to idle between presses?',
                replies: [{ by: 'operator', text: 'Yes, idle time was set to 3 s. Now 30 s on this bench.' }],
              },
            ],
          },
        },
      ],
    },
    {
      participant: 'SG-05', rig: heron2, by: 'operator', when: { fromNowH: -1.5 },
      trials: [
        {
          task: 'pick-and-place', condition: 'Q',
          run: {
            seed: 5401, durationS: 42, troubles: [{ kind: 'oscillation' }, { kind: 'slack', cable: 1 }, { kind: 'slip', cable: 4 }],
            outcome: { outcome: 'completed' },
            notes: [
              { by: 'operator', at: { kind: 'slip' }, cables: true, text: 'Length of this cable reads off from here on. Drum set screw looked at after the trial: it had slipped by about a tooth, tightened.' },
              { by: 'secondOperator', at: { kind: 'oscillation' }, text: 'Shaking while the block was held against nothing. Does the grip limit have a part in it?', replies: [{ by: 'operator', text: 'Possibly. It stopped as soon as the fingers opened a little.' }] },
            ],
          },
        },
        { task: 'press', condition: 'Q', run: { seed: 5402, durationS: 34, troubles: [{ kind: 'slack', cable: 8 }, { kind: 'saturation', cable: 5 }] } },
        { task: 'pick-and-place', condition: 'R' },
        { task: 'reach', condition: 'R' },
      ],
    },
    {
      participant: 'SG-06', rig: heron2, by: 'operator', when: { fromNowH: 2 },
      trials: [{ task: 'reach', condition: 'R' }, { task: 'pick-and-place', condition: 'R' }, { task: 'press', condition: 'Q' }, { task: 'pick-and-place', condition: 'Q' }],
    },
    {
      participant: 'SG-07', rig: heron2, by: 'lead', when: { day: 1, hour: 10 },
      trials: [{ task: 'pick-and-place', condition: 'Q' }, { task: 'pick-and-place', condition: 'R' }],
    },
  ],
};

const mortise: DemoStudy = {
  code: 'MORTISE',
  title: 'Mortise: tracing a ring at two pretensions',
  protocol: 'One visit. Three trials of tracing the ring at low and at high pretension, then one of picking and placing at the pretension that felt better.\n\n'
    + 'Recorded on Wren. A trial is void when a cable comes off.',
  conditions: [{ blindCode: 'K', label: 'Low pretension' }, { blindCode: 'M', label: 'High pretension' }],
  tasks: [{ code: 'trace', title: 'Trace the ring', timeLimitS: 45 }, { code: 'pick-and-place', title: 'Pick a block and place it', timeLimitS: 60 }],
  members: [
    { who: 'lead', role: 'lead', blind: false },
    { who: 'secondOperator', role: 'operator', blind: false },
    { who: 'clinician', role: 'clinician', blind: true },
  ],
  participants: [
    { code: 'MT-11', hand: 'right' }, { code: 'MT-12', hand: 'right' }, { code: 'MT-13', hand: 'left' }, { code: 'MT-14', hand: 'right' }, { code: 'MT-15', hand: 'both' },
  ],
  sessions: [
    {
      participant: 'MT-12', rig: wren, by: 'secondOperator', when: { day: -2, hour: 13 }, closed: true,
      trials: [
        {
          task: 'trace', condition: 'K',
          run: {
            seed: 6101, durationS: 38, troubles: [{ kind: 'pretension' }, { kind: 'gap' }],
            outcome: { outcome: 'completed' },
            notes: [{ by: 'secondOperator', at: { kind: 'slack' }, span: true, cables: true, text: 'Ring lost for a moment: the palm sagged and came back. Participant said it felt like stepping on ice.', replies: [{ by: 'lead', text: 'Good words. Worth keeping for the report.' }] }],
          },
        },
        {
          task: 'trace', condition: 'M',
          run: {
            seed: 6102, durationS: 32, troubles: [{ kind: 'cable-off', cable: 5, atS: 27.5 }],
            outcome: { outcome: 'void', reason: 'Cable 5 came off its pulley at 27 s.' },
            notes: [{ by: 'secondOperator', at: { kind: 'slip' }, cables: true, text: 'Cable came off. Stopped by hand, participant was told, nothing touched them. Guard on this pulley bent back.' }],
          },
        },
      ],
    },
    { participant: 'MT-14', rig: wren, by: 'secondOperator', when: { day: 1, hour: 11 }, trials: [{ task: 'trace', condition: 'M' }, { task: 'trace', condition: 'K' }, { task: 'pick-and-place', condition: 'M' }] },
  ],
};

export const demoStudies: readonly DemoStudy[] = [sedge, mortise];
