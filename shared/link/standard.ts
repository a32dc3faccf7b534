/**
 * Looks through a MessagePack frame before anything of it is built: standard types only, one value, nothing behind it.
 *
 * A decoder that knows extension types would build what a peer asks it to build; the link has none, so a frame that holds
 * one is refused unread. Source: the MessagePack specification (its format table), from memory.
 */

/** Deepest nesting in any message of the link is 3 (hello > rig > code). */
const DEEPEST = 8;
/** Longest list of values in a message is hello's channels; twice a map's pairs. */
const MOST_VALUES = 4096;

export type FrameFlaw = 'cut short' | 'bytes behind the value' | 'extension type' | 'nested too deep' | 'too many values' | 'not a map';

/** @returns what is wrong with the frame, or null when it is one map of standard types */
export function frameFlaw(bytes: Uint8Array): FrameFlaw | null {
  const end = bytes.length;
  const left: number[] = [1];
  let at = 0;
  let values = 0;
  const big = (size: number): number => {
    let value = 0;
    for (let i = 0; i < size; i += 1) value = value * 256 + (bytes[at + i] ?? 0);
    at += size;
    return value;
  };
  /** The size has to be read before it is added: reading it moves `at` too. */
  const skip = (size: number): void => {
    const length = big(size);
    at += length;
  };
  const first = bytes[0] ?? 0xc0;
  if (end > 0 && !((first >= 0x80 && first <= 0x8f) || first === 0xde || first === 0xdf)) return 'not a map';
  while (left.length > 0) {
    const depth = left.length - 1;
    const remaining = left[depth] ?? 0;
    if (remaining === 0) {
      left.pop();
      continue;
    }
    left[depth] = remaining - 1;
    if (at >= end) return 'cut short';
    values += 1;
    if (values > MOST_VALUES) return 'too many values';
    const token = bytes[at] ?? 0;
    at += 1;
    let inside = 0;
    if (token < 0x80 || token >= 0xe0) continue;
    if (token < 0x90) inside = (token - 0x80) * 2;
    else if (token < 0xa0) inside = token - 0x90;
    else if (token < 0xc0) at += token - 0xa0;
    else {
      switch (token) {
        case 0xc0: case 0xc2: case 0xc3: break;
        case 0xc4: case 0xd9: skip(1); break;
        case 0xc5: case 0xda: skip(2); break;
        case 0xc6: case 0xdb: skip(4); break;
        case 0xcc: case 0xd0: at += 1; break;
        case 0xcd: case 0xd1: at += 2; break;
        case 0xca: case 0xce: case 0xd2: at += 4; break;
        case 0xcb: case 0xcf: case 0xd3: at += 8; break;
        case 0xdc: inside = big(2); break;
        case 0xdd: inside = big(4); break;
        case 0xde: inside = big(2) * 2; break;
        case 0xdf: inside = big(4) * 2; break;
        default: return 'extension type';
      }
    }
    if (at > end) return 'cut short';
    if (inside > 0) {
      if (inside > MOST_VALUES) return 'too many values';
      if (left.length >= DEEPEST) return 'nested too deep';
      left.push(inside);
    }
  }
  return at === end ? null : 'bytes behind the value';
}
