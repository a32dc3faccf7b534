/** Samples that came beside samples that were sent: every time and every bit. */
import type { Chunk } from '@shared/recording';

/** Differences in words, the first few; none when both hold the same samples in the same order, however they are cut. */
export function differences(stored: Iterable<Chunk>, sent: Iterable<Chunk>): string[] {
  const found: string[] = [];
  const ours = samplesOf(stored);
  const theirs = samplesOf(sent);
  for (let i = 0; found.length < 5; i += 1) {
    const [a, b] = [ours.next(), theirs.next()];
    if (a.done === true && b.done === true) break;
    if (a.done === true || b.done === true) {
      found.push(`${a.done === true ? 'stored' : 'sent'} ends at sample ${i}`);
      break;
    }
    if (a.value.number !== i) found.push(`sample ${i} is stored as number ${a.value.number}`);
    if (a.value.timeUs !== b.value.timeUs) found.push(`sample ${i} at ${a.value.timeUs} µs, sent at ${b.value.timeUs}`);
    if (a.value.bits !== b.value.bits) found.push(`sample ${i} has other values than were sent`);
  }
  return found;
}

function* samplesOf(chunks: Iterable<Chunk>): Generator<{ number: number; timeUs: number; bits: string }> {
  for (const { first, count, timesUs, columns } of chunks) {
    // Patterns, not numbers: NaN is no number's equal and negative zero is zero's.
    const bits = columns.map((column) => new Uint32Array(column.buffer, column.byteOffset, column.length));
    for (let i = 0; i < count; i += 1) yield { number: first + i, timeUs: timesUs[i] as number, bits: bits.map((column) => column[i]).join(' ') };
  }
}
