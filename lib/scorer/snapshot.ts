import { SnapshotError } from "./errors";
import { checkOptions, type ResolvedOptions } from "./options";
import { METHODS } from "./types";

/**
 * Layout, little-endian: magic (8 bytes), format (u32), method (u32), dimension (u32), number of doubles of state
 * (u32), eleven doubles of options and count, the state's raw doubles, CRC-32 of all before it (u32).
 */
const MAGIC = [0x43, 0x55, 0x50, 0x45, 0x4c, 0x53, 0x43, 0x52];
const FORMAT = 1;
const HEADER = 24;
const OPTION_DOUBLES = 11;
const THEORY = -1;

export interface SnapshotContent {
  options: ResolvedOptions;
  labels: number;
  state: Float64Array;
}

export function encodeSnapshot({ options, labels, state }: SnapshotContent): Uint8Array {
  const numbers = [
    options.weightBound,
    options.featureBound,
    options.marginBound,
    options.regularization,
    options.outcomeWeight,
    options.offset,
    options.forgetting,
    options.linearization === "prior" ? 1 : 0,
    options.curvature === "theory" ? THEORY : options.curvature,
    options.refitEvery,
    labels,
  ];
  const bytes = new Uint8Array(HEADER + 8 * (OPTION_DOUBLES + state.length) + 4);
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC);
  view.setUint32(8, FORMAT, true);
  view.setUint32(12, METHODS.indexOf(options.method), true);
  view.setUint32(16, options.dimension, true);
  view.setUint32(20, state.length, true);
  let at = HEADER;
  for (const value of numbers) {
    view.setFloat64(at, value, true);
    at += 8;
  }
  for (let i = 0; i < state.length; i++, at += 8) view.setFloat64(at, state[i] as number, true);
  view.setUint32(at, checksum(bytes, at), true);
  return bytes;
}

/** Errors: SnapshotError when the bytes are cut, changed, of another format or hold what cannot be. */
export function decodeSnapshot(bytes: Uint8Array): SnapshotContent {
  if (!(bytes instanceof Uint8Array) || bytes.length < HEADER + 8 * OPTION_DOUBLES + 4) {
    throw new SnapshotError("too short for a scorer snapshot");
  }
  if (MAGIC.some((byte, i) => bytes[i] !== byte)) throw new SnapshotError("not a scorer snapshot");
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  const format = view.getUint32(8, true);
  if (format !== FORMAT) throw new SnapshotError(`snapshot format ${format} is not known here`);
  const length = view.getUint32(20, true);
  const end = HEADER + 8 * (OPTION_DOUBLES + length);
  if (bytes.length !== end + 4) throw new SnapshotError(`snapshot has ${bytes.length} bytes, not ${end + 4}`);
  if (view.getUint32(end, true) !== checksum(bytes, end))
    throw new SnapshotError("snapshot is damaged: checksum differs");
  const number = (i: number) => view.getFloat64(HEADER + 8 * i, true);
  const state = new Float64Array(length);
  for (let i = 0; i < length; i++) {
    state[i] = number(OPTION_DOUBLES + i);
    if (!Number.isFinite(state[i])) throw new SnapshotError(`snapshot holds ${state[i]} at ${i}`);
  }
  return { options: decodeOptions(view, number), labels: number(10), state };
}

function decodeOptions(view: DataView, number: (i: number) => number): ResolvedOptions {
  const curvature = number(8);
  const method = METHODS[view.getUint32(12, true)];
  if (method === undefined) throw new SnapshotError("snapshot is of an unknown method");
  const options: ResolvedOptions = {
    dimension: view.getUint32(16, true),
    method,
    weightBound: number(0),
    featureBound: number(1),
    marginBound: number(2),
    regularization: number(3),
    outcomeWeight: number(4),
    offset: number(5),
    forgetting: number(6),
    linearization: number(7) === 1 ? "prior" : "posterior",
    curvature: curvature === THEORY ? "theory" : curvature,
    refitEvery: number(9),
  };
  try {
    checkOptions(options);
  } catch (cause) {
    throw new SnapshotError("snapshot holds impossible options", { cause });
  }
  return options;
}

const TABLE = Uint32Array.from({ length: 256 }, (_, byte) => {
  let value = byte;
  for (let bit = 0; bit < 8; bit++) value = value & 1 ? (value >>> 1) ^ 0xedb88320 : value >>> 1;
  return value >>> 0;
});

/** CRC-32 as in ISO 3309 (polynomial 0xEDB88320, reflected). */
function checksum(bytes: Uint8Array, end: number): number {
  let crc = 0xffffffff;
  for (let i = 0; i < end; i++) {
    crc = (TABLE[(crc ^ (bytes[i] as number)) & 0xff] as number) ^ (crc >>> 8);
  }
  return (crc ^ 0xffffffff) >>> 0;
}
