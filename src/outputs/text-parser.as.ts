/**
 * The text parser of text-parser.ts over bytes in memory; the same rows, values equal to the last bit.
 * Written in AssemblyScript, built to text-parser.wasm. The memory is the caller's: see text-kernel.edge.ts.
 *
 * Decimals become doubles by one 64 x 128 bit product with a tabulated power of five: D. Lemire, Number parsing at a
 * gigabyte per second, Software: Practice and Experience 51 (2021) 1700; N. Mushtak and D. Lemire, Fast number parsing
 * without fallback, ibid. 53 (2023) 1467. What is not plain digits (NaN, quotes, words, more than 19 digits in doubt) goes
 * to the host, cell by cell.
 */

/** The host's reading of the cell from `at` to `end`; it stores 1 at `FAULT` when it is no number. */
@external("env", "cell")
declare function cell(at: usize, end: usize): f64;

// Places in the first page; the host writes the powers of five and of ten and the wanted columns, and reads the rest.
const USED: usize = 32768;
const LINES: usize = 32776;
const STOPPED: usize = 32784;
const FAULT: usize = 32792;
/** 10^0 to 10^7. */
const TENS: usize = 32800;

const SMALLEST_POWER = -342;
const LARGEST_POWER = 308;

function isBlank(byte: u8): bool { return byte == 32 || byte == 9 || byte == 13; }
function isDigit(byte: u8): bool { return <u8>(byte - 48) < 10; }

/**
 * Parses up to `room` rows; the value of row r in the c-th wanted column goes to output + 8 (c room + r).
 * Leaves behind the bytes and lines used, and why it stopped: 0 all read or room is full, 1 ragged row, 2 not a number.
 */
export function parse(
  input: usize, length: i32, final: i32, separator: i32, columns: i32, wanted: usize, powers: usize, output: usize, room: i32,
): i32 {
  const stop = input + <usize>length;
  const stride = <usize>room << 3;
  let used = input, rows = 0, lines = 0;
  store<i32>(STOPPED, 0);
  while (used < stop && rows < room) {
    let at = used;
    while (at < stop && isBlank(load<u8>(at))) at++;
    let end: usize;
    const lead = at < stop ? load<u8>(at) : 10;
    if (lead == 10 || lead == 35 || lead == 33 || lead == 37) {
      end = lineEnd(at, stop);
      if (end == stop && !final) break;
      used = end < stop ? end + 1 : stop;
      lines++;
      continue;
    }
    end = lineEnd(at, stop);
    if (end == stop && !final) break;
    let column = 0;
    let row = output + (<usize>rows << 3);
    while (at <= end) {
      let next = at;
      let fault = 0;
      if (column >= columns) fault = 1;
      else if (separator < 0 && load<u8>(wanted + <usize>column) != 0) {
        // The usual case: a number up to the next blank, told while it is read.
        next = number(at, end, powers);
        if (next == 0) {
          next = at;
          while (next < end && !isBlank(load<u8>(next))) next++;
          store<f64>(row, hosted(at, next));
          if (load<i32>(FAULT) != 0) fault = 2;
        } else store<f64>(row, value);
        row += stride;
      } else {
        if (separator < 0) while (next < end && !isBlank(load<u8>(next))) next++;
        else next = cellEnd(at, end, <u8>separator);
        if (load<u8>(wanted + <usize>column) != 0) {
          let from = at, to = next;
          while (from < to && isBlank(load<u8>(from))) from++;
          while (to > from && isBlank(load<u8>(to - 1))) to--;
          if (from < to && number(from, to, powers) == to) store<f64>(row, value);
          else {
            store<f64>(row, hosted(from, to));
            if (load<i32>(FAULT) != 0) fault = 2;
          }
          row += stride;
        }
      }
      if (fault != 0) return leave(rows, used - input, lines, fault);
      column++;
      at = next + 1;
      if (separator < 0) {
        while (at < end && isBlank(load<u8>(at))) at++;
        if (at >= end) break;
      }
    }
    if (column != columns) return leave(rows, used - input, lines, 1);
    rows++;
    used = end < stop ? end + 1 : stop;
    lines++;
  }
  return leave(rows, used - input, lines, 0);
}

function leave(rows: i32, used: usize, lines: i32, stopped: i32): i32 {
  store<i32>(USED, <i32>used);
  store<i32>(LINES, lines);
  store<i32>(STOPPED, stopped);
  return rows;
}

function hosted(at: usize, end: usize): f64 {
  store<i32>(FAULT, 0);
  return cell(at, end);
}

function lineEnd(at: usize, stop: usize): usize {
  const newline = i8x16.splat(10);
  while (at + 16 <= stop) {
    const found = i8x16.bitmask(i8x16.eq(v128.load(at), newline));
    if (found != 0) return at + <usize>ctz<i32>(found);
    at += 16;
  }
  while (at < stop && load<u8>(at) != 10) at++;
  return at;
}

function cellEnd(at: usize, end: usize, separator: u8): usize {
  let quoted = false;
  for (; at < end; at++) {
    const byte = load<u8>(at);
    if (byte == 34) quoted = !quoted;
    else if (byte == separator && !quoted) return at;
  }
  return end;
}

/** The number last read. */
let value: f64 = 0;

/** Zero when all eight bytes are digits; otherwise the lowest byte that is not zero is the first that is none. */
function notDigits(word: u64): u64 {
  return ((word & 0xf0f0f0f0f0f0f0f0) ^ 0x3030303030303030) | (((word + 0x0606060606060606) & 0xf0f0f0f0f0f0f0f0) ^ 0x3030303030303030);
}

/** Eight digits in one 64-bit word to their number, by three multiplications. */
function eightDigitValue(word: u64): u64 {
  const digits = word - 0x3030303030303030;
  const pairs = digits * 10 + (digits >> 8);
  return (((pairs & 0x000000ff000000ff) * 0x000f424000000064 + ((pairs >> 16) & 0x000000ff000000ff) * 0x0000271000000001) >> 32) & 0xffffffff;
}

/**
 * Reads a number that ends at a blank or at `end`; its end, or 0 when the host must look at the cell.
 * What stands at `end` is no digit: a line end, a separator, or the line end that the host puts behind the input.
 */
function number(start: usize, end: usize, powers: usize): usize {
  let at = start;
  const sign = load<u8>(at);
  if (sign == 45 || sign == 43) at++;
  let mantissa: u64 = 0;
  const digitsAt = at;
  while (isDigit(load<u8>(at))) {
    mantissa = mantissa * 10 + <u64>(load<u8>(at) - 48);
    at++;
  }
  let digits = <i32>(at - digitsAt);
  let exponent: i64 = 0;
  if (load<u8>(at) == 46) {
    at++;
    const fraction = at;
    let word = load<u64>(at);
    let others = notDigits(word);
    while (others == 0) {
      mantissa = mantissa * 100000000 + eightDigitValue(word);
      at += 8;
      word = load<u64>(at);
      others = notDigits(word);
    }
    // The last digits, moved behind zeros to make eight.
    const bits = ctz<u64>(others) & 56;
    if (bits != 0) {
      mantissa = mantissa * load<u64>(TENS + <usize>bits) + eightDigitValue((word << (64 - bits)) | (0x3030303030303030 >> bits));
      at += <usize>(bits >> 3);
    }
    digits += <i32>(at - fraction);
    exponent = -<i64>(at - fraction);
  }
  // 19 digits always fit into 64 bits; more may have run over.
  if (digits == 0 || digits > 19) return 0;
  if (at < end && !isBlank(load<u8>(at))) {
    let byte = load<u8>(at);
    const letter = byte | 32;
    if (letter == 101 || letter == 100 || letter == 113) {
      at++;
      if (at == end) return 0;
      byte = load<u8>(at);
    } else if (byte != 43 && byte != 45) return 0;
    const negative = byte == 45;
    if (negative || byte == 43) at++;
    const exponentAt = at;
    let written: i64 = 0;
    while (at < end && isDigit(load<u8>(at))) {
      written = written * 10 + <i64>(load<u8>(at) - 48);
      at++;
    }
    if (at == exponentAt || at - exponentAt > 6) return 0;
    exponent += negative ? -written : written;
    if (at < end && !isBlank(load<u8>(at))) return 0;
  }
  const size = toDouble(mantissa, exponent, powers);
  value = sign == 45 ? -size : size;
  return at;
}

/** The double nearest to mantissa * 10^power, ties to even; exact for any 64-bit mantissa. */
function toDouble(mantissa: u64, power: i64, powers: usize): f64 {
  if (mantissa == 0 || power < SMALLEST_POWER) return 0;
  if (power > LARGEST_POWER) return Infinity;
  const zeros = <i32>clz<u64>(mantissa);
  const w = mantissa << zeros;
  const entry = powers + (<usize>(power - SMALLEST_POWER) << 4);
  multiply(w, load<u64>(entry));
  let high = productHigh, low = productLow;
  if ((high & 0x1ff) == 0x1ff) {
    multiply(w, load<u64>(entry, 8));
    low += productHigh;
    if (productHigh > low) high++;
  }
  const upper = <i32>(high >> 63);
  const shift = upper + 9;
  let m = high >> shift;
  let exponent = <i32>((217706 * power) >> 16) + 63 + upper - zeros + 1023;
  if (exponent <= 0) {
    if (1 - exponent >= 64) return 0;
    m >>= 1 - exponent;
    m += m & 1;
    m >>= 1;
    return reinterpret<f64>(m);
  }
  if (low <= 1 && power >= -4 && power <= 23 && (m & 3) == 1 && m << shift == high) m &= ~1;
  m += m & 1;
  m >>= 1;
  if (m >= 0x20000000000000) {
    m = 0x10000000000000;
    exponent++;
  }
  if (exponent >= 2047) return Infinity;
  return reinterpret<f64>((m & 0xfffffffffffff) | (<u64>exponent << 52));
}

let productHigh: u64 = 0;
let productLow: u64 = 0;

/** 64 x 64 bits to 128. */
function multiply(a: u64, b: u64): void {
  const a0 = a & 0xffffffff, a1 = a >> 32, b0 = b & 0xffffffff, b1 = b >> 32;
  const p00 = a0 * b0, p01 = a0 * b1, p10 = a1 * b0, p11 = a1 * b1;
  const middle = (p00 >> 32) + (p01 & 0xffffffff) + (p10 & 0xffffffff);
  productLow = (p00 & 0xffffffff) | (middle << 32);
  productHigh = p11 + (p01 >> 32) + (p10 >> 32) + (middle >> 32);
}
