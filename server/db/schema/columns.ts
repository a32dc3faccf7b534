/** Column kinds that several tables share. */
import { customType, timestamp, uuid } from 'drizzle-orm/pg-core';
import { v7 } from 'uuid';

/** Bytes: binary on PGlite (see engine) and on PostgreSQL. */
export const bytes = customType<{ data: Uint8Array; driverData: Uint8Array }>({
  dataType: () => 'bytea',
  toDriver: (value) => value,
  fromDriver: (value) => value,
});

/** Time-ordered ids, so that rows of one time lie together (RFC 9562 version 7). */
export const id = () => uuid('id').primaryKey().$defaultFn(() => v7());

export const at = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });
