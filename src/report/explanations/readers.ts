/** Pages on what readers and callers find. */
import type { ReaderKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const readersExplanations = {
  'source-incomplete': {
    means: 'Part of a source file could not be read, so what it declares or calls is not known.',
    arises: 'A statement of a dialect that no standard has, a template, a macro that makes code, or a damaged file.',
    mend: 'Look at the line. Where a build option decides, name it under "define" in the assembly.',
    accept: 'When the part that was not read is no part of any interface.',
    example: 'A macro that writes whole procedures stands where a declaration should.',
  },
  'call-count': {
    means:
      'A call passes more or fewer arguments than the procedure takes. Without an explicit interface no compiler says so; what is read or written instead is whatever lies there.',
    arises: 'An argument was added or removed and one caller, or one build option, was left behind.',
    mend: 'Pass what the definition takes. Where another definition is meant, name the module that provides it.',
    accept: 'When the caller is never compiled into this code.',
    example: 'call eos(rho, temp, pres) while eos takes a fourth argument since last week.',
  },
  'call-keyword': {
    means: 'A call names an argument that the procedure does not have.',
    arises: 'A dummy argument was renamed.',
    mend: 'Use the name that it has now.',
    accept: 'Hardly ever: it does not compile where the interface is in sight.',
    example: 'call cool(temperature=t) while the argument is called temp.',
  },
  'call-kind': {
    means:
      'An integer or real of one size is passed for one of another size: half of it is read, or memory beside it is written.',
    arises: 'Kinds were cleaned up on one side only, or a switch of the build promotes one side.',
    mend: 'Pass the kind that is taken. Where the build promotes defaults, say so under "promote" in the assembly.',
    accept:
      'When both sides are the same size on every machine in use, and it is said why the reader thinks otherwise.',
    example: 'An integer*4 counter is passed for an integer*8 sum.',
  },
  'call-type': {
    means:
      'A value of one type is passed for another. Old codes do so on purpose to share storage; elsewhere it is garbage.',
    arises: 'Scratch arrays are handed on, or an argument was mistaken for its neighbour.',
    mend: 'Pass the type that is taken, or see that the storage is only passed through.',
    accept: 'For scratch storage that the callee fills before it reads.',
    example: 'A real work array is passed for an integer one.',
  },
  'call-rank': {
    means:
      'A scalar is passed for an array, or an array for a scalar. Where no interface is in sight no compiler says so.',
    arises: 'Old codes pass a scalar where one element is used; or an index was forgotten at the call.',
    mend: 'Pass an array for an array. For one element write it with its index.',
    accept: 'When the callee uses one element only.',
    example: 'call vecnorm(x) with a scalar x, while vecnorm takes an array of n.',
  },
  'call-order': {
    means:
      'Two arguments of one type look exchanged: the names at the call match the names in the definition crosswise.',
    arises: 'The order of arguments changed, or was remembered wrongly. No compiler can tell.',
    mend: 'Look at both sides. Put them into the order of the definition, or rename one side.',
    accept: 'When the exchange is meant, such as a call for the reverse direction.',
    example: 'call mix(b, a) of subroutine mix(a, b).',
  },
  'call-claim': {
    means:
      'What a comment says of a value where it is passed and what a comment says where it is taken do not agree: a conversion is missing, or made twice.',
    arises: 'Units were changed on one side, or two modules were written in different ones.',
    mend: 'Convert at the call, or correct the comment that is wrong.',
    accept: 'When the conversion is made on the way, out of sight of both comments.',
    example: 'A density said to be in kg/m3 is passed for one said to be in g/cm3.',
  },
  'result-order': {
    means: 'A tuple is unpacked into the names that are returned, in another order.',
    arises: 'The order of what is returned changed and a caller was left behind.',
    mend: 'Unpack in the order in which it is returned.',
    accept: 'Hardly ever.',
    example: 'ener, pres = eos(rho, temp) while eos returns pres, ener.',
  },
  'call-constant-out': {
    means:
      'A constant is passed for an argument that is written to: some compilers then change the constant everywhere.',
    arises: 'An argument became an output, or a placeholder was passed for an unwanted result.',
    mend: 'Pass a variable.',
    accept: 'Never.',
    example: 'call eos(rho, temp, 0.0) while the third argument is the pressure that comes back.',
  },
  'common-differs': {
    means: 'One COMMON block is laid out in two ways: a name in one place holds what another name holds in the other.',
    arises: 'A member was added, moved or retyped in one place; the block is written out in several files.',
    mend: 'Bring both to one layout and put it into one include file.',
    accept: 'When one side only uses the part that both have in common.',
    example: 'COMMON /DUST/ TDUST, RATIO, AGRAIN in one file and AGRAIN, TDUST, RATIO in another.',
  },
  'common-scratch': {
    means: 'A COMMON block is laid out differently nearly everywhere: storage that is shared in turn.',
    arises: 'Memory was scarce.',
    mend: 'Nothing, as long as no routine calls another that uses the same block.',
    accept: 'As a rule.',
    example: '/SCRNS/ has sixty layouts at ninety places.',
  },
  'prototype-differs': {
    means:
      'A prototype or interface body does not say what the definition says, so callers that trust it pass the wrong things.',
    arises: 'The definition changed and the declaration was left behind.',
    mend: 'Bring both to one signature.',
    accept: 'When the declaration stands for another library of the same name.',
    example: 'A header declares double flux(double, double) while the definition takes a third argument.',
  },
} satisfies Record<ReaderKind, Explanation>;
