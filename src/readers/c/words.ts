/** Words of C and C++ that a scanner of declarations has to tell apart. */

const set = (text: string) => new Set(text.split(/\s+/));

/** Words that a type may be made of. */
export const BUILTIN = set(
  'void bool __complex__ char short int long float double signed unsigned wchar_t char8_t char16_t char32_t auto _Bool _Complex __int128 __float128 size_t',
);
/** Qualifiers that are no part of the type that is compared. */
export const QUALIFIERS = set(
  'const volatile restrict __restrict __restrict__ register mutable typename constexpr consteval constinit static extern inline __inline __inline__ __forceinline virtual explicit thread_local _Thread_local friend __extension__ __const __volatile__ noexcept final override _Noreturn _Alignas __device__ __host__ __global__ __shared__ __constant__ typedef',
);
/** Tags before the name of a type. */
export const TAGS = set('struct class union enum');
/** Words before a bracket that are no call. */
export const NO_CALL = set(
  '__int128 __float128 __typeof __alignof__ __alignof __decltype wchar_t char8_t char16_t char32_t __extension__ __real__ __imag__ __vector_size__ __aligned__ __builtin_offsetof __builtin_va_arg if while for switch return sizeof alignof alignas _Alignof decltype catch defined __attribute__ __attribute __declspec static_assert _Static_assert noexcept throw new delete typeid co_await co_return co_yield requires asm __asm__ __asm typeof __typeof__ else do case goto operator template typename and or not static_cast dynamic_cast const_cast reinterpret_cast _Pragma __pragma int double float char long short unsigned signed void bool auto const constexpr explicit',
);
/** Words after which a name before a bracket is still called. */
export const BEFORE_CALL = set('return else case do throw co_return co_await co_yield and or not in goto new delete');

const BYTES: Readonly<Record<string, number>> = {
  double: 8,
  float: 4,
  int: 4,
  long: 8,
  short: 2,
  char: 1,
  bool: 1,
  _Bool: 1,
  'long long': 8,
  'unsigned int': 4,
  unsigned: 4,
  'unsigned long': 8,
  'unsigned long long': 8,
  'unsigned short': 2,
  'unsigned char': 1,
  'signed char': 1,
  'long double': 16,
  'long int': 8,
  'short int': 2,
  'unsigned long int': 8,
  'long long int': 8,
  'unsigned long long int': 8,
  'unsigned short int': 2,
  size_t: 8,
  'std::size_t': 8,
  ssize_t: 8,
  ptrdiff_t: 8,
  'std::ptrdiff_t': 8,
  int8_t: 1,
  uint8_t: 1,
  int16_t: 2,
  uint16_t: 2,
  int32_t: 4,
  uint32_t: 4,
  int64_t: 8,
  uint64_t: 8,
  'std::int32_t': 4,
  'std::int64_t': 8,
  'std::uint32_t': 4,
  'std::uint64_t': 8,
  wchar_t: 4,
  char16_t: 2,
  char32_t: 4,
  __int128: 16,
  'double _Complex': 16,
  'float _Complex': 8,
  'long double _Complex': 32,
  'std::complex<double>': 16,
  'std::complex<float>': 8,
};

/** Bytes of one element of a type on 64-bit Unix (LP64); null where it depends on another file. */
export function bytesOfType(type: string): number | null {
  return Object.hasOwn(BYTES, type) ? BYTES[type]! : null;
}

/** A name that stands for a vendor's marker: capitals, digits and underscores only, a capital among them. */
export function isMarker(name: string): boolean {
  if (name.length <= 2) return false;
  let capital = false;
  for (let at = 0; at < name.length; at++) {
    const code = name.charCodeAt(at);
    if (code >= 65 && code <= 90) capital = true;
    else if (code !== 95 && (at === 0 || code < 48 || code > 57)) return false;
  }
  return capital;
}
