/** What lets others check a record later: one text for one value. */
export { canonicalJson, type Json } from './canonical-json';
