import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  TRIAL_GONE: { status: 410, sentence: 'This trial was taken out of its session meanwhile; nothing was written.', wayOut: 'Keep your text if you need it, and go back to the session.' },
  NOTE_UNKNOWN: { status: 404, sentence: 'There is no such note.', wayOut: 'Reload the trial.' },
  NOTE_OUTSIDE: { status: 422, sentence: 'The place of the note is outside the recording, which ends at {end} s.', wayOut: 'Choose a point or a span inside the recording.' },
  NOTE_NO_RECORDING: { status: 409, sentence: 'The trial has no recording yet that a note could point into.', wayOut: 'Record the trial first.' },
  NOTE_CABLE: { status: 422, sentence: 'The rig has cables 1 to {count}, and no cable {cable}.', wayOut: 'Choose among the cables of the rig.' },
  NOTE_KEY: { status: 409, sentence: 'This note was sent before with another place.', wayOut: 'Reload the trial and write it again.' },
  NOTE_IS_REPLY: { status: 422, sentence: 'This is a reply; only the note it belongs to can be answered and resolved.', wayOut: 'Use the note above it.' },
  NOT_YOURS: { status: 403, sentence: 'Only the person who wrote a note can edit it.', wayOut: 'Write a reply instead.' },
  EDIT_CONFLICT: { status: 409, sentence: 'The note was edited meanwhile; yours would have replaced version {version} unread.', wayOut: 'Read the newer version, then edit again.' },
});
