/** Words before a parenthesis that are no call of anyone's procedure: keywords, and intrinsics of Fortran 77 to 2018 that old and new codes use. */

/** The flag of these words in the table of names. */
export const NOT_CALLED = 8;

const WORDS =
  `if else elseif where forall while do select case call write read print open close inquire rewind backspace return stop allocate deallocate nullify associate
  abs acos acosh adjustl adjustr aimag aint alog alog10 all allocated amax0 amax1 amin0 amin1 amod anint any asin asinh associated atan atan2 atanh bessel_j0 bessel_j1 bit_size btest
  cabs ccos ceiling cexp char clog cmplx command_argument_count conjg cos cosh count cpu_time cshift csin csqrt dabs dacos dasin datan datan2 dble dconjg dcmplx dcos dcosh ddim dexp
  digits dim dimag dint dlog dlog10 dmax1 dmin1 dmod dnint dot_product dprod dreal dsign dsin dsinh dsqrt dtan dtanh eoshift epsilon erf erfc exp exponent float floor fraction gamma
  huge iabs iachar iand ibclr ibits ibset ichar idim idint idnint ieor ifix index int ior ishft ishftc isign isnan kind lbound len len_trim lge lgt lle llt log log10 log_gamma logical loc
  matmul max max0 max1 maxexponent maxloc maxval merge min min0 min1 minexponent minloc minval mod modulo move_alloc nearest nint not null pack precision present product radix random_number
  range real repeat reshape rrspacing scale scan selected_int_kind selected_real_kind set_exponent shape sign sin sinh size sngl spacing spread sqrt sum tan tanh tiny transfer transpose trim
  ubound unpack verify zabs zexp zsqrt iargc getarg c_loc c_f_pointer c_funloc c_associated storage_size same_type_as extends_type_of is_contiguous findloc norm2 hypot
  integer character complex type class intent dimension format entry assign concurrent rank achar dfloat popcnt poppar leadz trailz shiftl shiftr shifta maskl maskr
  iall iany iparity parity lcobound ucobound num_images this_image image_index bge bgt ble blt dshiftl dshiftr merge_bits erfc_scaled bessel_jn bessel_y0 bessel_y1 bessel_yn`.split(
    /\s+/,
  );

export const NOT_CALLED_WORDS: readonly (readonly [string, number])[] = WORDS.map(
  (word) => [word, NOT_CALLED] as const,
);
