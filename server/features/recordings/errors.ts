import { defineRefusals } from '../../http';

export const refuse = defineRefusals({
  RECORDING_UNKNOWN: { status: 404, sentence: 'There is no such recording here, or it is not open to you.', wayOut: 'Open its trial again.' },
  SPAN_ORDER: { status: 422, sentence: 'The span ends before it starts.', wayOut: 'Ask for a span whose end is later than its start.' },
  FILE_FAULTS: { status: 422, sentence: 'The file has faults; nothing of it was kept.', wayOut: 'Correct the places listed (the first twenty are shown) and file it again.' },
  FILE_TOO_SHORT: { status: 422, sentence: 'The file holds {samples} samples; a recording needs two or more.', wayOut: 'Choose the file that holds the whole trial.' },
  FILE_TOO_LARGE: { status: 413, sentence: 'The file is larger than {most} GB.', wayOut: 'Split it at a pause into two trials.' },
  FILE_NOT_GZIP: { status: 422, sentence: 'The file starts as gzip but does not go on as gzip.', wayOut: 'Copy it again, or send it unpacked.' },
  FILE_CUT_SHORT: { status: 422, sentence: 'The file did not come in whole.', wayOut: 'Check the connection and file it again.' },
  NOT_RECORDED: { status: 404, sentence: 'This trial has no recording yet.', wayOut: 'Record it first, then export it.' },
});
