import { customType } from 'drizzle-orm/pg-core';

/** Raw bytes; little-endian arrays say their element type and shape beside the column. */
export const bytea = customType<{ data: Uint8Array; driverData: Uint8Array }>({ dataType: () => 'bytea' });
