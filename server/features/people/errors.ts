import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  SETUP_DONE: { status: 409, sentence: 'This Tautbook already has an administrator.', wayOut: 'Sign in, or ask an administrator for an invitation.' },
  SETUP_CODE: { status: 403, sentence: 'This is not the code that the server printed.', wayOut: 'Copy the one-time code from the console of the running server; each start prints a new one.' },
  EMAIL_TAKEN: { status: 409, sentence: 'A person with this e-mail address is already in the lab.', wayOut: 'Change that person’s role, or use another address.' },
  PERSON_UNKNOWN: { status: 404, sentence: 'There is no such person in the lab.', wayOut: 'Reload the list of people.' },
  LAST_ADMINISTRATOR: { status: 409, sentence: 'This is the only administrator, and a lab needs one.', wayOut: 'Make another person an administrator first.' },
});
