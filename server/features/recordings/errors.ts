import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  RECORDING_UNKNOWN: { status: 404, sentence: 'There is no such recording here, or it is not open to you.', wayOut: 'Open its trial again.' },
  SPAN_ORDER: { status: 422, sentence: 'The span ends before it starts.', wayOut: 'Ask for a span whose end is later than its start.' },
  NOT_RECORDED: { status: 404, sentence: 'This trial has no recording yet.', wayOut: 'Record it first, then export it.' },
});
