import { customType } from "drizzle-orm/mysql-core";

/** MariaDB's UUID type; uuidv7 values sort by their time of making. */
export const uuid = customType<{ data: string; driverData: string }>({ dataType: () => "uuid" });

/** UTC instant with milliseconds; DATETIME does not shift with the session's zone. */
export const instant = customType<{ data: Date; driverData: Date | string }>({
  dataType: () => "datetime(3)",
  fromDriver: (value) => (value instanceof Date ? value : new Date(`${value.replace(" ", "T")}Z`)),
});

/** Raw bytes. Drizzle's own binary columns decode to text and corrupt them. */
export const bytes = customType<{
  data: Buffer;
  driverData: Buffer;
  config: { length?: number; fixed?: boolean };
}>({
  dataType: (config) =>
    config?.length ? `${config.fixed ? "binary" : "varbinary"}(${config.length})` : "longblob",
});

/** A double that must come back bit for bit: the text protocol drops the last bit of a DOUBLE column. */
export const exactDouble = customType<{ data: number; driverData: Buffer }>({
  dataType: () => "binary(8)",
  toDriver: (value) => {
    const buffer = Buffer.alloc(8);
    buffer.writeDoubleLE(value);
    return buffer;
  },
  fromDriver: (value) => value.readDoubleLE(0),
});

/** JSON kept as text by MariaDB; parsed here because the driver is told to hand it over as a string. */
export const json = <T>(read: (text: string) => T = (text) => JSON.parse(text) as T) =>
  customType<{ data: T; driverData: string }>({
    dataType: () => "json",
    toDriver: (value) => JSON.stringify(value),
    fromDriver: (value) => (typeof value === "string" ? read(value) : (value as T)),
  });

/** A vector of doubles as little-endian bytes. */
export function vectorToBytes(vector: Float64Array): Buffer {
  return Buffer.from(new Uint8Array(vector.buffer, vector.byteOffset, vector.byteLength));
}

/** The driver's buffers are not aligned to eight bytes, so the vector is a copy. */
export function bytesToVector(buffer: Buffer): Float64Array {
  const copy = new Uint8Array(buffer.byteLength);
  copy.set(buffer);
  return new Float64Array(copy.buffer);
}
