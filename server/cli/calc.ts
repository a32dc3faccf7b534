/**
 * `npm run -s calc`: answers the numerics' calls as JSON, from standard input to standard output. No server, no database.
 *
 * Exit status 0 when every request was answered (a refusal is an answer), 2 when the input is not a request or a list of them.
 */
import { text } from 'node:stream/consumers';
import { answerRequest, requestsSchema } from './calc/answer-request';

const input = await text(process.stdin);
const requests = readRequests(input);
if (requests === null) {
  process.stderr.write('calc reads one JSON request { "call": "...", ... } or an array of them on standard input.\n');
  process.exitCode = 2;
} else {
  const answers = Array.isArray(requests) ? requests.map(answerRequest) : answerRequest(requests);
  process.stdout.write(`${JSON.stringify(answers)}\n`);
}

function readRequests(json: string) {
  try {
    const read = requestsSchema.safeParse(JSON.parse(json));
    return read.success ? read.data : null;
  } catch (error) {
    if (error instanceof SyntaxError) return null;
    throw error;
  }
}
