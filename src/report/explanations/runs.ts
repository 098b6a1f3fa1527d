/** Explanations of what reruns find. */
import type { RunKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const runsExplanations = {
  'reference-altered': {
    means:
      'The output files that results are compared with are not those that someone vouched for: every comparison with them says nothing.',
    arises:
      'A file under manifests/references was edited, replaced by hand, cut short, or changed by a tool that rewrites line ends; or a recording was ended half way.',
    mend: 'Bring the files back with "git checkout -- manifests/references/CASE", or record the reference again, with a reason.',
    accept: 'Never: an altered reference can hide exactly the change that it is there to show.',
    example: 'profile.csv is not the file that was recorded: its digest differs',
  },
  'tree-incomplete': {
    means:
      'The code was built and run without a file that its repository names, so the result may not be what the complete code gives.',
    arises:
      'The file is a link that leads outside the repository, belongs to a submodule, or is missing from a partial clone. Runs happen in a scratch folder made from the repository alone.',
    mend: 'Put the file itself into the repository, declare it as an input, or fetch what the clone lacks.',
    accept: 'When the file has nothing to do with the case, such as documentation in a submodule.',
    example:
      'tables/opacity.h5 was not there when the code was built and run: it is a link that leads outside, to /data/opacity.h5.',
  },
} satisfies Record<RunKind, Explanation>;
