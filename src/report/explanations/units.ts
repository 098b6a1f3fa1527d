/** What `mortise help` says of findings about unit strings. */
import type { UnitKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const unitsExplanations = {
  'unit-unknown': {
    means:
      'A string stands where a unit is expected and none can be read from it, so nothing can be said about factors or dimensions.',
    arises: 'A slip of the pen ("Kg", "g/cm^"), a word of a project that no table knows, or text that is no unit.',
    mend: 'Write the unit in UCUM, VOUnits or UDUNITS spelling, or as in comments: "erg/g", "g cm^-3", "MeV/baryon". The column says where reading stopped.',
    accept:
      'When the quantity is in code units that have no name outside the code; better, declare it dimensionless and say so in the title.',
    example: 'internal-energy: "erg/gr m" is refused at column 5; "erg/g" is meant.',
  },
  'unit-ambiguous': {
    means: 'The string is a unit in more than one way, and the readings differ in factor or dimension.',
    arises:
      'Short names that trades share ("mb": millibar, millibarn), years of several lengths, and products behind a solidus: "W/m2 K".',
    mend: 'Write the reading that is meant: "mbar", "a_j", "W/(m2 K)".',
    accept: 'When only one reading has the dimension of the quantity, and readers of the code know it.',
    example: '"erg/g*s" is erg s/g to a machine and often erg/(g s) to its author; they differ by s^2.',
  },
} satisfies Record<UnitKind, Explanation>;
