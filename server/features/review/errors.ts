import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  FLAG_UNKNOWN: { status: 404, sentence: '{count} of these flags are not in this study, or their trial was taken out.', wayOut: 'Load the list again; what you wrote stays where it is.' },
  VERDICT_NEWER: { status: 409, sentence: 'Somebody judged {count} of these flags since you read them.', wayOut: 'See what they wrote, then judge again if you still differ. Nothing of yours was written yet.' },
  VERDICT_NOT_YOURS: { status: 409, sentence: 'The newest verdict is not yours, so it cannot be taken back by you.', wayOut: 'Give a verdict of your own instead; theirs stays in the record.' },
});
