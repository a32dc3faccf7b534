import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  STUDY_UNKNOWN: { status: 404, sentence: 'There is no such study.', wayOut: 'Reload the list of studies.' },
  STUDY_CODE_TAKEN: { status: 409, sentence: 'A study with the code {code} exists already.', wayOut: 'Choose another code.' },
  STUDY_CODES_TWICE: { status: 422, sentence: 'Two conditions or two tasks have the same code.', wayOut: 'Give each its own code.' },
  MEMBER_UNKNOWN: { status: 404, sentence: 'This person is not a member of the study.', wayOut: 'Reload the list of members.' },
  PERSON_UNKNOWN: { status: 404, sentence: 'There is no such person in the lab, or their access is closed.', wayOut: 'Ask an administrator to invite them.' },
  MEMBER_ROLE: { status: 422, sentence: 'In this lab the person is {labRole}, and cannot be {studyRole} in a study.', wayOut: 'Choose another role, or ask an administrator to change the person’s role in the lab.' },
  LAST_LEAD: { status: 409, sentence: 'This is the only lead of the study, and a study needs one.', wayOut: 'Make another member a lead first.' },
  PARTICIPANT_TAKEN: { status: 409, sentence: 'The study already has a participant {code}.', wayOut: 'Use that participant, or the next free code.' },
});
