import { defineRefusals } from '../http';

export const refuse = defineRefusals({
  INVALID_EMAIL_OR_PASSWORD: { status: 401, sentence: 'E-mail and password do not fit together.', wayOut: 'Check both, or have a new password sent.' },
  PERSON_CLOSED: { status: 403, sentence: 'Your access to this lab is closed.', wayOut: 'Ask an administrator to open it again.' },
  INVALID_PASSWORD: { status: 400, sentence: 'The present password is not right.', wayOut: 'Type it again, or sign out and have a new one sent.' },
  INVALID_TOKEN: { status: 400, sentence: 'This link has been used or is too old.', wayOut: 'Ask for a new one.' },
});
