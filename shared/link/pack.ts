/**
 * MessagePack without anything of its own: no extension types, no records, byte blocks as bin.
 *
 * Numbers: whole ones up to 32 bits in their shortest form, all others as float64. A reader takes any numeric form.
 */
import { Packr, Unpackr } from 'msgpackr';

const packr = new Packr({ useRecords: false, variableMapSize: true, moreTypes: false });
const unpackr = new Unpackr({ useRecords: false, mapsAsObjects: true, int64AsType: 'number' });

/** Bytes of one map. Fields that are undefined are left out (MessagePack has no such value). */
export function pack(map: Readonly<Record<string, unknown>>): Uint8Array {
  let whole: Record<string, unknown> | null = null;
  for (const key in map) {
    if (map[key] === undefined) {
      whole = Object.fromEntries(Object.entries(map).filter(([, value]) => value !== undefined));
      break;
    }
  }
  return packr.pack(whole ?? map);
}

/** The value that the bytes hold; byte blocks are views into them. Throws on bytes that are no MessagePack. */
export const unpack = (bytes: Uint8Array): unknown => unpackr.unpack(bytes);
