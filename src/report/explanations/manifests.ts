/** Pages for findings about manifests. */
import type { ManifestKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const manifestsExplanations = {
  'manifest-unreadable': {
    means: 'A manifest could not be read at all, so nothing it declares was checked.',
    arises:
      'The file is not UTF-8, is larger than 1 MB, nests without end, multiplies itself through aliases, or asks with a tag that something be built or run.',
    mend: 'Save it as UTF-8; keep data in tables; write repeated parts out; remove tags. A manifest is data, never code.',
    accept: 'Never: what cannot be read cannot be checked.',
    example: 'title: na\\xefve, saved in Latin-1.',
  },
  'manifest-syntax': {
    means: 'The text is not YAML 1.2, or says two things at once.',
    arises:
      'A tab as indent, a key that stands twice, a bracket that stays open, an alias to nothing, a second document in one file.',
    mend: 'The line under the place shows where; write what the finding says.',
    accept: 'Never.',
    example: 'version: 1.0.0 on one line and version: 1.0.1 on the next.',
  },
  'manifest-unknown-key': {
    means: 'A key means nothing here. It is refused, since a misspelt key would silently switch a check off.',
    arises: 'A slip of the pen, or a key that belongs one level higher or lower.',
    mend: 'Write the key that was meant. The schemas under manifests/schema let an editor complete keys.',
    accept: 'Never; put remarks into YAML comments.',
    example: 'expcets: [...] in place of expects: [...].',
  },
  'manifest-invalid': {
    means: 'A value is missing, or has not the form that it must have.',
    arises:
      'A number written as in Fortran (1d-26), a version of two numbers, which YAML reads as one number, a range that ends below its beginning.',
    mend: 'Write what the finding says.',
    accept: 'Never.',
    example: 'version: 1.10, which YAML reads as the number 1.1.',
  },
  'manifest-absent': {
    means: 'There is no assembly, so it is not known which modules make the code.',
    arises: 'The program was started outside the code, or the code has no manifests yet.',
    mend: 'Start it inside the code, name the assembly with --assembly FILE, or write manifests with "mortise draft".',
    accept: 'Never.',
    example: 'mortise check in a home folder.',
  },
  'manifest-duplicate': {
    means: 'Two files declare the same name; the second is not used, and it may be the one that was meant.',
    arises: 'A manifest was copied as a start for another, and its name was left.',
    mend: 'Give one of them its own name, or remove it.',
    accept: 'Never.',
    example: 'modules/eos-table.yaml and modules/eos-new.yaml both say module: eos-table.',
  },
  'manifest-unknown-name': {
    means: 'A manifest names a module, contract, quantity, case or procedure that no manifest declares.',
    arises: 'A slip of the pen, a rename in one place only, a manifest that was removed.',
    mend: 'Write the name that was meant, or declare it.',
    accept: 'Never: what hangs on the name is not checked.',
    example: 'equation-of-state: eos-ionizing, where the module is called eos-ionising.',
  },
  'manifest-inconsistent': {
    means: 'Each part is sound, and together they contradict one another.',
    arises:
      'A module plugged into a component that it does not fill, a convention with a choice the contract does not leave, a quantity named twice.',
    mend: 'Decide which side is right and correct the other.',
    accept:
      'A caution about a command that looks written for a shell may stand when the program really wants that word.',
    example: 'gravity: hydro, where hydro fills hydrodynamics.',
  },
  'manifest-outside': {
    means:
      'A path leads out of the repository, or a manifest is a link. What lies outside is not part of any revision, so nothing about it can be said later.',
    arises: 'A table on a shared disk, a source folder beside the repository, a link to another checkout.',
    mend: 'Bring the file into the repository (or into its large-file store) and write the path from the root.',
    accept: 'Never for source; keep large tables in the repository by reference, with their digest.',
    example: 'files: [../common/constants.f90].',
  },
} as const satisfies Record<ManifestKind, Explanation>;
