/** Pages for findings about what changed over time. */
import type { DriftKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const historyExplanations = {
  'drift-undeclared': {
    means:
      'An interface, unit, convention, constant or domain changed, and the version that went out with it does not say so. Codes that hold a copy, and results that name the version, cannot know.',
    arises:
      'The version was left alone in a hurry; the change looked like a clean-up (a comment, a literal, the order of arguments); or the bump was smaller than the change.',
    mend: 'Declare the version that the policy asks for, with the commit named, or take the change back. Then look at every call listed: it still passes what the old interface took.',
    accept:
      'When everyone who calls the module was changed with it and no copy is in use elsewhere; say so in the reason.',
    example:
      'eos-ionising stayed at 2.1.0 while temperature and density changed places; the hydrodynamics solver was mended in the same commit, a second solver was not.',
  },
  'drift-unversioned': {
    means:
      'Interfaces and values changed over the history, and nothing in the code ever declares a version that could say so.',
    arises: 'The code has no manifests, no tags that name versions and no version file.',
    mend: 'Write manifests with "mortise draft" and tag releases; from then on each step is held against a version.',
    accept: 'For the years before the code was versioned.',
    example: '212 steps changed an interface or a value since 2009, and the repository has no tag.',
  },
  'reference-renewed': {
    means: 'The validated output of a case was replaced. Every later comparison is made with the new one.',
    arises: 'A change moved the result on purpose, or a failing case was made to pass.',
    mend: 'See that the reason is written beside the reference, and that the modules that moved the result were given a new version.',
    accept: 'When the reason stated holds.',
    example: 'The reference of cloud-shock was renewed with the new cooling fit; the reason names the paper.',
  },
  'tolerance-widened': {
    means: 'A case now allows a greater deviation than before, so what used to fail may pass.',
    arises: 'Another compiler or machine gave other roundoff, or a real deviation was waved through.',
    mend: 'See that the commit tells why more deviation is right; put the tolerance back if it does not.',
    accept: 'When the measured roundoff of the platforms in use needs it.',
    example: 'The relative tolerance of temperature in cloud-shock is 1e-3, was 1e-6.',
  },
  'copy-behind': {
    means: 'A copy of a module in another code lacks changes that were made here since it was taken.',
    arises: 'Modules are copied by hand between codes, and mends do not travel with them.',
    mend: 'Take over the mends listed, or record why the copy goes its own way.',
    accept: 'When the copy was changed on purpose and is looked after as a module of its own.',
    example: 'The copy of burn.f was split off in 2014; three mends of the rate at low temperature are missing in it.',
  },
} satisfies Record<DriftKind, Explanation>;
