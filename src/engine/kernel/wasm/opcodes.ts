/**
 * The WebAssembly instructions that the kernels use, as data: operation code, operand types, result type.
 * Source: W3C WebAssembly Core Specification 2.0, chapter 5 (binary format).
 */

export type ValueType = 'i32' | 'i64' | 'f64' | 'v128';

interface Instruction<T extends readonly ValueType[], G extends ValueType | 'none'> {
  code: number[];
  takes: T;
  gives: G;
}

/** Prefix 0xFD of vector instructions, followed by the LEB128 form of their number. */
const vector = (number: number): number[] =>
  number < 128 ? [0xfd, number] : [0xfd, (number & 127) | 128, number >> 7];

const instruction = <const T extends readonly ValueType[], G extends ValueType | 'none'>(
  code: number | number[],
  takes: T,
  gives: G,
): Instruction<T, G> => ({ code: typeof code === 'number' ? [code] : code, takes, gives });

const scalar = <T extends ValueType, G extends ValueType>(code: number, type: T, gives: G) =>
  instruction(code, [type, type], gives);
const pair = (number: number) => instruction(vector(number), ['v128', 'v128'], 'v128');
const single = (number: number) => instruction(vector(number), ['v128'], 'v128');
const shift = (number: number) => instruction(vector(number), ['v128', 'i32'], 'v128');

export const instructions = {
  'i32.eqz': instruction(0x45, ['i32'], 'i32'),
  'i32.eq': scalar(0x46, 'i32', 'i32'),
  'i32.ne': scalar(0x47, 'i32', 'i32'),
  'i32.lt_s': scalar(0x48, 'i32', 'i32'),
  'i32.lt_u': scalar(0x49, 'i32', 'i32'),
  'i32.gt_s': scalar(0x4a, 'i32', 'i32'),
  'i32.gt_u': scalar(0x4b, 'i32', 'i32'),
  'i32.le_s': scalar(0x4c, 'i32', 'i32'),
  'i32.le_u': scalar(0x4d, 'i32', 'i32'),
  'i32.ge_s': scalar(0x4e, 'i32', 'i32'),
  'i32.ge_u': scalar(0x4f, 'i32', 'i32'),
  'i64.eqz': instruction(0x50, ['i64'], 'i32'),
  'i64.eq': scalar(0x51, 'i64', 'i32'),
  'i64.ne': scalar(0x52, 'i64', 'i32'),
  'i64.lt_s': scalar(0x53, 'i64', 'i32'),
  'i64.lt_u': scalar(0x54, 'i64', 'i32'),
  'i64.ge_s': scalar(0x59, 'i64', 'i32'),
  'f64.eq': scalar(0x61, 'f64', 'i32'),
  'f64.ne': scalar(0x62, 'f64', 'i32'),
  'f64.lt': scalar(0x63, 'f64', 'i32'),
  'f64.gt': scalar(0x64, 'f64', 'i32'),
  'f64.le': scalar(0x65, 'f64', 'i32'),
  'f64.ge': scalar(0x66, 'f64', 'i32'),
  'i32.clz': instruction(0x67, ['i32'], 'i32'),
  'i32.ctz': instruction(0x68, ['i32'], 'i32'),
  'i32.add': scalar(0x6a, 'i32', 'i32'),
  'i32.sub': scalar(0x6b, 'i32', 'i32'),
  'i32.mul': scalar(0x6c, 'i32', 'i32'),
  'i32.div_u': scalar(0x6e, 'i32', 'i32'),
  'i32.and': scalar(0x71, 'i32', 'i32'),
  'i32.or': scalar(0x72, 'i32', 'i32'),
  'i32.xor': scalar(0x73, 'i32', 'i32'),
  'i32.shl': scalar(0x74, 'i32', 'i32'),
  'i32.shr_s': scalar(0x75, 'i32', 'i32'),
  'i32.shr_u': scalar(0x76, 'i32', 'i32'),
  'i64.clz': instruction(0x79, ['i64'], 'i64'),
  'i64.add': scalar(0x7c, 'i64', 'i64'),
  'i64.sub': scalar(0x7d, 'i64', 'i64'),
  'i64.mul': scalar(0x7e, 'i64', 'i64'),
  'i64.and': scalar(0x83, 'i64', 'i64'),
  'i64.or': scalar(0x84, 'i64', 'i64'),
  'i64.xor': scalar(0x85, 'i64', 'i64'),
  'i64.shl': scalar(0x86, 'i64', 'i64'),
  'i64.shr_s': scalar(0x87, 'i64', 'i64'),
  'i64.shr_u': scalar(0x88, 'i64', 'i64'),
  'i64.rotl': scalar(0x89, 'i64', 'i64'),
  'f64.abs': instruction(0x99, ['f64'], 'f64'),
  'f64.neg': instruction(0x9a, ['f64'], 'f64'),
  'f64.ceil': instruction(0x9b, ['f64'], 'f64'),
  'f64.floor': instruction(0x9c, ['f64'], 'f64'),
  'f64.trunc': instruction(0x9d, ['f64'], 'f64'),
  'f64.nearest': instruction(0x9e, ['f64'], 'f64'),
  'f64.sqrt': instruction(0x9f, ['f64'], 'f64'),
  'f64.add': scalar(0xa0, 'f64', 'f64'),
  'f64.sub': scalar(0xa1, 'f64', 'f64'),
  'f64.mul': scalar(0xa2, 'f64', 'f64'),
  'f64.div': scalar(0xa3, 'f64', 'f64'),
  'f64.min': scalar(0xa4, 'f64', 'f64'),
  'f64.max': scalar(0xa5, 'f64', 'f64'),
  'i32.wrap_i64': instruction(0xa7, ['i64'], 'i32'),
  'i32.trunc_f64_s': instruction(0xaa, ['f64'], 'i32'),
  'i32.trunc_sat_f64_s': instruction([0xfc, 2], ['f64'], 'i32'),
  'i64.extend_i32_s': instruction(0xac, ['i32'], 'i64'),
  'i64.extend_i32_u': instruction(0xad, ['i32'], 'i64'),
  'i64.trunc_sat_f64_s': instruction([0xfc, 6], ['f64'], 'i64'),
  'f64.convert_i32_s': instruction(0xb7, ['i32'], 'f64'),
  'f64.convert_i32_u': instruction(0xb8, ['i32'], 'f64'),
  'f64.convert_i64_s': instruction(0xb9, ['i64'], 'f64'),
  'f64.convert_i64_u': instruction(0xba, ['i64'], 'f64'),
  'i64.reinterpret_f64': instruction(0xbd, ['f64'], 'i64'),
  'f64.reinterpret_i64': instruction(0xbf, ['i64'], 'f64'),
  'i32x4.splat': instruction(vector(0x11), ['i32'], 'v128'),
  'i64x2.splat': instruction(vector(0x12), ['i64'], 'v128'),
  'f64x2.splat': instruction(vector(0x14), ['f64'], 'v128'),
  'f64x2.eq': pair(0x47),
  'f64x2.ne': pair(0x48),
  'f64x2.lt': pair(0x49),
  'f64x2.gt': pair(0x4a),
  'f64x2.le': pair(0x4b),
  'f64x2.ge': pair(0x4c),
  'v128.not': single(0x4d),
  'v128.and': pair(0x4e),
  'v128.andnot': pair(0x4f),
  'v128.or': pair(0x50),
  'v128.xor': pair(0x51),
  'v128.bitselect': instruction(vector(0x52), ['v128', 'v128', 'v128'], 'v128'),
  'v128.any_true': instruction(vector(0x53), ['v128'], 'i32'),
  'f64x2.ceil': single(0x74),
  'f64x2.floor': single(0x75),
  'f64x2.nearest': single(0x94),
  'i64x2.all_true': instruction(vector(0xc3), ['v128'], 'i32'),
  'i64x2.bitmask': instruction(vector(0xc4), ['v128'], 'i32'),
  'i64x2.shl': shift(0xcb),
  'i64x2.shr_u': shift(0xcd),
  'i64x2.add': pair(0xce),
  'i64x2.sub': pair(0xd1),
  'f64x2.abs': single(0xec),
  'f64x2.neg': single(0xed),
  'f64x2.sqrt': single(0xef),
  'f64x2.add': pair(0xf0),
  'f64x2.sub': pair(0xf1),
  'f64x2.mul': pair(0xf2),
  'f64x2.div': pair(0xf3),
  'f64x2.min': pair(0xf4),
  'f64x2.max': pair(0xf5),
  'f64x2.pmin': pair(0xf6),
  'f64x2.pmax': pair(0xf7),
};
export type Operation = keyof typeof instructions;

/** Instructions that take a lane number. */
export const laneInstructions = {
  'i64x2.extract_lane': instruction(vector(0x1d), ['v128'], 'i64'),
  'i64x2.replace_lane': instruction(vector(0x1e), ['v128', 'i64'], 'v128'),
  'f64x2.extract_lane': instruction(vector(0x21), ['v128'], 'f64'),
  'f64x2.replace_lane': instruction(vector(0x22), ['v128', 'f64'], 'v128'),
};
export type LaneOperation = keyof typeof laneInstructions;

/** Instructions that take an address and carry an alignment (as a power of two) and an offset. */
export const memoryInstructions = {
  'i32.load': { ...instruction(0x28, ['i32'], 'i32'), alignment: 2 },
  'i64.load': { ...instruction(0x29, ['i32'], 'i64'), alignment: 3 },
  'f64.load': { ...instruction(0x2b, ['i32'], 'f64'), alignment: 3 },
  'i32.load8_u': { ...instruction(0x2d, ['i32'], 'i32'), alignment: 0 },
  'i32.load16_u': { ...instruction(0x2f, ['i32'], 'i32'), alignment: 1 },
  'i64.load32_u': { ...instruction(0x35, ['i32'], 'i64'), alignment: 2 },
  'i32.store': { ...instruction(0x36, ['i32', 'i32'], 'none'), alignment: 2 },
  'i64.store': { ...instruction(0x37, ['i32', 'i64'], 'none'), alignment: 3 },
  'f64.store': { ...instruction(0x39, ['i32', 'f64'], 'none'), alignment: 3 },
  'v128.load': { ...instruction(vector(0x00), ['i32'], 'v128'), alignment: 4 },
  'v128.load64_splat': { ...instruction(vector(0x0a), ['i32'], 'v128'), alignment: 3 },
  'v128.load64_zero': { ...instruction(vector(0x5d), ['i32'], 'v128'), alignment: 3 },
  'v128.store': { ...instruction(vector(0x0b), ['i32', 'v128'], 'none'), alignment: 4 },
};
export type MemoryOperation = keyof typeof memoryInstructions;

/** Loads of one lane: address, vector, then alignment, offset and lane. */
export const laneMemoryInstructions = {
  'v128.load64_lane': { ...instruction(vector(0x57), ['i32', 'v128'], 'v128'), alignment: 3 },
  'v128.store64_lane': { ...instruction(vector(0x5b), ['i32', 'v128'], 'none'), alignment: 3 },
};
export type LaneMemoryOperation = keyof typeof laneMemoryInstructions;

export const valueTypeCodes: Record<ValueType, number> = { i32: 0x7f, i64: 0x7e, f64: 0x7c, v128: 0x7b };
