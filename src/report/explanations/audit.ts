/** Pages on what an audit finds. */
import type { AuditKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const auditExplanations = {
  'acceptance-expired': {
    means: 'Something that was accepted for a while counts again, because its last day has passed.',
    arises: 'An entry of manifests/accepted.yaml has an "until" before today.',
    mend: 'Mend the finding itself. If it must stand longer, give a new last day and a reason that is true today.',
    accept: 'Never: renew the acceptance instead.',
    example:
      'accepted: [{finding: constant-disagrees, module: opacity, reason: "table due in May", until: 2026-05-31}]',
  },
  'acceptance-unused': {
    means: 'An acceptance meets nothing: the finding was mended, or the acceptance names it wrongly.',
    arises: 'The finding went away, its module was renamed, or its words changed with a new version.',
    mend: 'Remove the entry, or correct the kind, module, file or words it gives.',
    accept: 'There is nothing to accept: the entry has no effect.',
    example: 'An acceptance for module "eos-saha" stays behind after the module was renamed "eos-ionising".',
  },
  'table-left': {
    means:
      'A run visits states beyond the edge of a table. What comes back is an extrapolation, a clamped value or garbage, and conservation or stability may fail quietly.',
    arises:
      'A table made for one problem is used for a hotter, denser or colder one; or a table was replaced by one with other edges.',
    mend: 'Extend the table, plug in a module that is valid there, or keep the run inside.',
    accept:
      'When the module is known to continue the table sensibly and the states beyond the edge do not matter to the result; say why.',
    example: 'A cooling table ends at 1e7 K while the shock heats the gas to 3e7 K.',
  },
  'domain-left': {
    means:
      'A run visits states for which a module was not made: outside the range of a fit, an approximation or a validation.',
    arises:
      'The module is used for another problem than the one it was written for, or its domain was narrowed by a change.',
    mend: 'Plug in a module that is valid there, or keep the run inside. Widen the domain only after showing that the module is right there.',
    accept: 'When the states outside are few and shown not to matter to the result.',
    example: 'A recombination fit valid from 1e3 K is asked at 10 K in the cold cloud.',
  },
  'table-altered': {
    means: 'A table is not the one that its manifest declares: every result that used it rests on other numbers.',
    arises: 'The file was regenerated, edited, converted or truncated without its digest and version being renewed.',
    mend: 'Bring back the declared file, or check the new one, renew the digest and bump the version of the module.',
    accept: 'Hardly ever: a digest costs one line.',
    example: 'cooling.csv was rewritten with fewer digits by a spreadsheet.',
  },
  'table-missing': {
    means: 'A table that a module needs is not there, so the module can not run as declared.',
    arises: 'The file is kept outside the repository, is left out of a clone, or was moved.',
    mend: 'Put the file in place, or correct the path in the manifest.',
    accept: 'When the module is not used in this campaign: unplug it instead.',
    example: 'tables/opacity.h5 is named in the manifest and absent from the work tree.',
  },
  'tree-dirty': {
    means: 'The code audited is in no revision: what runs can not be named, found again or rebuilt.',
    arises: 'Files were edited, added or removed and not committed.',
    mend: 'Commit the changes or put them aside, then audit again.',
    accept: 'For a trial audit while working; never for a campaign whose results will be published.',
    example: 'src/eos/ionising.ts differs from the revision by one constant.',
  },
  'not-pinned': {
    means: 'It is open which version of something the campaign uses, so it may change under a running campaign.',
    arises: 'A range or a name stands where one version should.',
    mend: 'Name one version, one revision or one digest.',
    accept: 'When nothing else than one version can be chosen in practice; say why.',
    example: 'A table is declared without a digest.',
  },
  'changed-since-validated': {
    means:
      'The module differs from the one with which the reference of a case was recorded: that the case agrees says nothing yet about today’s code.',
    arises: 'The module was changed after the reference was recorded.',
    mend: 'Run the cases. Where they agree nothing else is needed; where they are meant to differ, record a new reference with a reason.',
    accept: 'When the change can not reach a result, such as a comment; a rerun is the better answer.',
    example: 'hydro 1.4.0 differs in 2 files from the hydro 1.3.0 that made the reference of cloud-shock.',
  },
  'never-validated': {
    means: 'No case with a reference exercises this module: nothing says that it gives the results it should.',
    arises: 'The module is new, or no case plugs it in.',
    mend: 'Write a case that uses it, compare it with something known, and record the reference.',
    accept: 'For a module whose effect on the results is known to be negligible.',
    example: 'dust-heating is plugged in and in no case.',
  },
  'platform-differs': {
    means:
      'References were recorded with another compiler, runtime or processor: small deviations may come from there and not from the code.',
    arises: 'The code was moved to another machine, or the machine was upgraded.',
    mend: 'Run the cases here. Deviations of class roundoff are what a change of platform does; larger ones need a look.',
    accept: 'When all cases agree within tolerance here.',
    example: 'Recorded with gfortran 9 on one processor, audited with gfortran 12 on another.',
  },
  'campaign-over-allocation': {
    means: 'The campaign as declared does not fit the memory, storage or core-hours granted.',
    arises: 'Grid, species, steps or outputs grew, the measured cost went up, or the grant is smaller than thought.',
    mend: 'Make the grid, the number of steps or the outputs smaller, speed up the code, or ask for more.',
    accept: 'When part of the campaign is paid for elsewhere; say where.',
    example: '41 million core-hours asked, 40 million granted.',
  },
  'campaign-cost-unknown': {
    means:
      'Core-hours were granted, and nothing says what one zone and one step cost, so nobody can tell whether they suffice.',
    arises: 'The campaign declares an allocation without a cost, or names a case as measure that was not run yet.',
    mend: 'Declare core-seconds-per-zone-step under "cost", or name a case with its zones and steps and run it.',
    accept: 'While the cost is being measured.',
    example: 'allocation: {core-hours: 2e6} without "cost:".',
  },
  'notice-touches': {
    means: 'A module version in use has a recorded defect.',
    arises: 'A notice in the register names this version or this commit.',
    mend: 'Move to a version in which the defect is mended, or show that the campaign does not meet its conditions.',
    accept: 'When the conditions of the notice are not met by this campaign; say which and why.',
    example: 'eos-ionising 2.0.3 to 2.1.0 use a wrong statistical weight above 1e4 K.',
  },
  'case-not-runnable': {
    means: 'A case could not be run here, so nothing is known of its results on this machine.',
    arises: 'A module needs a program that is not installed, such as a compiler.',
    mend: 'Install what is missing, or audit on a machine that has it.',
    accept: 'When the module of that case is not part of the campaign.',
    example: 'dust-heating needs gfortran, which is not found.',
  },
  'case-failed': {
    means: 'A case could not be built or did not run to its end: the code as it stands does not do what it did.',
    arises: 'A change broke the build, an input is missing, the run crashed, or it ran out of time or memory.',
    mend: 'Read the last lines of its log, mend the cause, run it again.',
    accept: 'Hardly ever: take the case out, with a reason, if it has no use any more.',
    example: 'cloud-shock ended with exit status 1 after "negative internal energy in zone 212".',
  },
  'case-not-run': {
    means: 'A declared case has no result at this state of the code, so nobody looked at what it guards.',
    arises: 'The audit was told to leave the cases alone, or was ended before they were done.',
    mend: 'Run the audit to its end; results that are kept from before are taken and not run again.',
    accept: 'Not for a campaign; a look at joints and history alone is "mortise check" and "mortise drift".',
    example: 'Case cloud-shock was not run.',
  },
  'result-beyond-tolerance': {
    means:
      'A physical result moved by more than it may. Either the code is wrong now, or it was wrong before, or the tolerance is.',
    arises: 'A module, constant, table, convention, compiler or machine changed.',
    mend: 'Find the step with "mortise trace CASE QUANTITY GOOD..BAD". Undo it, or record a new reference with the reason why the new result is right.',
    accept: 'When the shift is understood and of no consequence for this campaign; say how it is known.',
    example: 'temperature of cloud-shock is 37 times its tolerance from the reference, worst at the front.',
  },
  'result-not-comparable': {
    means: 'A result can not be set against its reference, so nothing says that it is right.',
    arises: 'An output is missing or damaged, holds NaN, changed its shape, names or units, or the grid is another.',
    mend: 'Bring back the form of the output, or tell in the case how to align it; record a new reference only when the new form is right.',
    accept: 'When the quantity is no longer part of the code: take it out of the case.',
    example: 'profile.csv has no column "temperature".',
  },
} satisfies Record<AuditKind, Explanation>;
