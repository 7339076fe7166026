import { customType, timestamp, uuid } from 'drizzle-orm/pg-core';

/** Raw bytes; copied on read because the driver reuses its buffers. */
export const bytea = customType<{ data: Uint8Array; driverData: Buffer }>({
  dataType: () => 'bytea',
  toDriver: (value) => Buffer.from(value.buffer, value.byteOffset, value.byteLength),
  fromDriver: (value) => new Uint8Array(value)
});

/** PostgreSQL's 64-bit transaction id, as text. */
export const xid8 = customType<{ data: string; driverData: string }>({ dataType: () => 'xid8' });

/** A UTC instant with microseconds, as the server's clock gave it. */
export const instant = () => timestamp({ withTimezone: true, mode: 'date' });

/** Primary key: a random UUID made by the database unless the client made it. */
export const idKey = () => uuid().primaryKey().defaultRandom();
