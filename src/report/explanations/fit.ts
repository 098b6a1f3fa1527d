/** Pages for findings about joints: where what one module expects meets what another offers. */
import type { FitKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const fitExplanations = {
  'joint-unmet': {
    means: 'A module needs something that no module plugged in gives.',
    arises: 'A component was left empty, or the module plugged into it offers another contract.',
    mend: 'Plug in a module that offers the contract, or say that the expectation is optional when the module works without it.',
    accept: 'Never for what the physics needs.',
    example: 'hydro expects cooling, and nothing is plugged into cooling.',
  },
  'joint-ambiguous': {
    means: 'Two modules plugged in give the same thing; which one is used is decided by the order of linking.',
    arises: 'A new module was plugged in beside the old one.',
    mend: 'Unplug one of them.',
    accept: 'When both are needed, give one of them a contract of its own.',
    example: 'eos-ionising and eos-table both offer gas-state.',
  },
  'joint-version': {
    means: 'A module was written for another version of the contract than the one that is there.',
    arises: 'The contract went on, or the module is older or newer than the rest of the assembly.',
    mend: 'Read what changed in the contract, bring the module up to it, and widen or move its range.',
    accept: 'Never; a range says what was tried, so try it and write it.',
    example: 'hydro expects gas-state ^1, and the contract is at 2.0.0.',
  },
  'joint-quantity': {
    means: 'The offering module does not give a quantity that the expecting one needs.',
    arises: 'The contract gained a quantity, or an argument was dropped.',
    mend: 'Say under "arguments" what carries it, or under "takes" what the expecting module really needs.',
    accept: 'Never.',
    example: 'eos-table offers gas-state without sound-speed.',
  },
  'joint-unit': {
    means:
      'Both sides mean the same quantity in units that differ by a factor. Handed over as it is, every value is wrong by that factor.',
    arises: 'One side is in cgs, the other in SI or in scaled units; a unit was changed on one side only.',
    mend: 'Write an adapter with the factor that the finding gives and name it under "adapter", or bring both sides to one unit.',
    accept: 'Never without an adapter.',
    example: 'internal-energy in J/kg at hydro and erg/g at eos-ionising: a factor of 1e4.',
  },
  'joint-dimension': {
    means: 'The two sides mean different quantities under one name: no factor turns one into the other.',
    arises:
      'Energy per gram against energy per volume, temperature against energy, rate per mole against rate per pair.',
    mend: 'Correct the unit that is wrong. If the quantities really differ, the adapter needs physics (a density, a constant): write it, and give both sides a contract that fits them.',
    accept: 'Never.',
    example: 'internal-energy in erg/g against erg/cm3.',
  },
  'joint-convention': {
    means: 'The units agree and the meaning does not: another zero of energy, another sign, another mass basis.',
    arises: 'Modules come from groups with different habits; no unit and no compiler shows it.',
    mend: 'Plug in a module with the same convention, or convert where that is possible (a sign by -1, a logarithm by its base). State the convention relied on, so that a default never decides.',
    accept: 'A caution about a convention that was never stated may stand while someone reads the code.',
    example: 'energy-zero ionised at hydro, neutral-atom at eos-ionising: 13.6 eV an atom apart.',
  },
  'joint-domain': {
    means:
      'The asking module can reach states for which the answering one is not valid. There a table is clamped or extrapolated, and a fit means nothing.',
    arises: 'A hotter problem, a finer grid, a table that is shorter than the one before.',
    mend: 'Plug in a module valid there, or keep the asking side inside with a limit of its own.',
    accept: 'When the run is known to stay inside; then narrow the domain that the asking side declares.',
    example: 'hydro reaches 1e9 K; the table ends at 1e8 K.',
  },
  'joint-order': {
    means:
      'Arguments of one type are passed in another order than they are taken. No compiler speaks, and the values are exchanged.',
    arises: 'Arguments were reordered on one side; a module with another order was plugged in.',
    mend: 'Pass them in the order of the procedure, pass them by keyword, or write an adapter.',
    accept: 'Never.',
    example: 'hydro passes temperature, density; eos takes density, temperature.',
  },
  'joint-shape': {
    means: 'One side hands over a scalar and the other takes an array, or arrays of different rank.',
    arises: 'A procedure for one zone became one for a whole row, or the other way round.',
    mend: 'Give both sides the shape of the contract.',
    accept: 'Two arrays of different rank may be meant, by sequence association; then say so in the contract.',
    example: 'density is of shape [zones] in the contract, and rho is a scalar.',
  },
  'joint-call': {
    means:
      'A call in the source does not agree with the procedure that it calls: number, type, bytes or order of arguments.',
    arises: 'The procedure changed and one caller was left behind; without an explicit interface no compiler looks.',
    mend: 'Bring the call up to the procedure.',
    accept: 'A caution about an array for a scalar may stand where only the first element is meant.',
    example: 'eos takes 5 arguments; this call passes 4.',
  },
  'source-missing': {
    means: 'A file that makes the module is not there, so nothing about it was checked.',
    arises: 'It was renamed or removed, it is a link, or the clone lacks it.',
    mend: 'Write the path as it stands now, or bring the file back.',
    accept: 'Never.',
    example: 'src/eos/ionising.f became src/eos/ionising.f90.',
  },
  'procedure-missing': {
    means: 'The manifest promises a procedure that the source does not have.',
    arises: 'It was renamed, moved to another file, or stands in a part that no reader could read.',
    mend: 'Write its name, or add the file that holds it.',
    accept: 'When it is made by a macro or a generator that is not read; say which.',
    example: 'procedure: eos_ionising, where the source has eos_ionised.',
  },
  'argument-missing': {
    means: 'What should carry a quantity is not in the code.',
    arises: 'An argument was renamed or dropped, and the manifest was left.',
    mend: 'Name the argument, result, field or variable that carries it now.',
    accept: 'When it is made by a macro that is not read.',
    example: 'internal-energy: eint, where the procedure has ener.',
  },
  'argument-unmapped': {
    means: 'The procedure takes an argument of which the manifest says nothing, so nobody knows what to pass.',
    arises: 'An argument was added to the code.',
    mend: 'Give it a quantity under "arguments", or list it under "besides" when it carries none (a size, a switch, an error code).',
    accept: 'While the manifest is being written.',
    example: 'eos_ionising takes ierr.',
  },
  'argument-type': {
    means: 'What should carry a physical quantity is a text, a truth value or a whole number.',
    arises: 'The manifest names the wrong argument, or the argument is typed by its first letter.',
    mend: 'Name the right one, or declare it.',
    accept: 'Never.',
    example: 'number-density: nden, an INTEGER by the implicit rule.',
  },
  'argument-intent': {
    means: 'The code changes what should only go in, or cannot give what should come out.',
    arises: 'An intent was tightened or loosened on one side.',
    mend: 'Bring the declaration and the contract together.',
    accept: 'A caution about inout may stand in code that was never given intents with care.',
    example: 'density is in by contract, and rho is intent(inout).',
  },
  'table-range': {
    means:
      'A module promises states that its table does not hold, or the table is not the one that the manifest describes.',
    arises: 'A table was exchanged for a shorter one, or the promise was copied from another module.',
    mend: 'Promise what the table covers, or make the table longer.',
    accept: 'When the module continues the table with a formula that is valid there; then say so in its title.',
    example: 'temperature promised to 1e9 K, table to 1e8 K.',
  },
  'claim-contradicts': {
    means:
      'A comment, docstring or attribute says otherwise than the manifest. One of the two misleads the next reader.',
    arises: 'A unit was changed in the code and not in the comment, or the other way round.',
    mend: 'Find out which is right, by following the value to where it is used, and correct the other.',
    accept: 'Never for long: old comments are how wrong factors come into new code.',
    example: 'eint ! specific internal energy [J/kg], where the manifest says erg/g.',
  },
} as const satisfies Record<FitKind, Explanation>;
