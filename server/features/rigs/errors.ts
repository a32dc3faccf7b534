import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  RIG_FAULTS: { status: 422, sentence: 'The rig file has faults and was not imported.', wayOut: 'Correct the points listed and import it again.' },
  RIG_SAME: { status: 409, sentence: 'Revision {revision} of {code} already has exactly this content.', wayOut: 'Use that revision, or change the file.' },
  RIG_UNKNOWN: { status: 404, sentence: 'There is no such rig.', wayOut: 'Reload the list of rigs.' },
  RIG_REVISION_UNKNOWN: { status: 404, sentence: 'There is no such revision of a rig.', wayOut: 'Choose one from the rig’s page.' },
});
