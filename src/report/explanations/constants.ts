/** What `mortise help` says of findings about constants and literals. */
import type { ConstantKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const constantsExplanations = {
  'constant-disagrees': {
    means:
      'One constant of nature has several values in one code, so that quantities computed in different places do not cancel to the last digit.',
    arises:
      'Modules written in different decades carry the CODATA edition of their day; literals are copied with fewer digits.',
    mend: 'Define the constant once and use that definition everywhere; name the edition in the manifest.',
    accept: 'When a table was made with the older value and must be read with it; say so beside the value.',
    example: 'eos.f has 1.380658d-16 (CODATA 1986), rates.f 1.380649d-16 (2018): 6.5e-6 apart.',
  },
  'constant-edition-mixed': {
    means:
      'One file holds constants of editions that never stood together, so derived combinations agree with no published set.',
    arises: 'One value is brought up to date and its neighbours are left.',
    mend: 'Take all values from one edition.',
    accept: 'When the difference is far below every tolerance and the reference results were made with this mixture.',
    example: 'G of 1998 beside k_B of 2006 in one header.',
  },
  'constant-unlike-any-edition': {
    means: 'A value is near a constant of nature and has the digits of no published edition.',
    arises: 'A digit was mistyped, two digits changed places, or the value was rounded twice.',
    mend: 'Compare it with its source digit by digit and write the published value.',
    accept: 'When it is another quantity that happens to lie near; give it a name that says so.',
    example: 'boltz = 1.380568d-16 where 1.380658d-16 (CODATA 1986) was meant.',
  },
  'constant-truncated': {
    means:
      'A number of mathematics is written with fewer digits than a double holds; the error enters everything computed with it.',
    arises: 'The literal was written by hand, often for a single-precision code.',
    mend: 'Write 17 digits, or compute it: 4 atan(1).',
    accept: 'When reference results were made with it and its error is below their tolerance.',
    example: 'pi = 3.14159 is 8.4e-7 off.',
  },
  'literal-single': {
    means:
      'A literal of default (single) precision is given to a variable of 8 bytes: the digits beyond the seventh are noise.',
    arises: 'In Fortran a real literal without a d exponent or kind is single, whatever it is given to.',
    mend: 'Write 0.1d0 or 0.1_dp; or state in the assembly that the build promotes default reals.',
    accept: 'When the build promotes default reals, or the value needs no more than six digits.',
    example: 'real*8 h; h = 6.6260755e-27 stores 6.626075692e-27, 2.9e-8 off.',
  },
  'integer-division': {
    means: 'Two integers are divided and the fraction is dropped: 2/3 is 0, x**(1/3) is 1.',
    arises: 'Fortran and C divide integers to an integer.',
    mend: 'Write one of them as a real number: 2.0d0/3.0d0.',
    accept: 'When the whole quotient is meant, as in an index.',
    example: 'coef = (4/3)*pi gives pi.',
  },
} satisfies Record<ConstantKind, Explanation>;
