/** Explanations of what the review of a change finds beyond what the other stages do. */
import type { ReviewKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const reviewExplanations = {
  'commands-differ': {
    means: 'The change would have the code built or run by another command than the one that was reviewed and merged.',
    arises:
      'A manifest at the head of the change declares another build, environment, executor or command for a case. A change from outside can make a command do anything that your account may do.',
    mend: 'Read the command and everything it starts. When you trust it, review again with --run-head-commands.',
    accept: 'When the change comes from your own group and the new command is what it is about.',
    example: 'The change declares another command for case front: "node {root}/run.mjs {out} --fast".',
  },
  'link-leaves': {
    means: 'A file of the code is whatever lies outside the repository at that path: another content on every machine.',
    arises: 'The change adds a symbolic link with an absolute target, or with more ".." than folders above it.',
    mend: 'Put the file into the repository, or declare it as an input of the cases that need it.',
    accept: 'Seldom: results then depend on a file that no commit names.',
    example: 'This link leads outside the repository, to "/data/opacity.h5".',
  },
  'submodule-moved': {
    means: 'Code that this repository does not hold becomes part of it, or moves to another commit.',
    arises:
      'The change adds or moves a submodule. Nothing is fetched during a review, so its content was not looked at.',
    mend: 'Review the submodule between the two commits in its own repository.',
    accept: 'When it was reviewed there.',
    example: 'The submodule moves at commit 4f1c2ab90d; what it brings was not looked at.',
  },
  'text-hides': {
    means: 'What a reader sees on the screen is not what the compiler reads.',
    arises:
      'New lines hold control characters, marks that reorder text (Unicode bidirectional controls) or characters without width. They come in by copying from documents, or on purpose.',
    mend: 'Take the characters out, or write them as escapes.',
    accept: 'When the text is written in a script that needs them, and someone who reads it has looked.',
    example: 'A new line holds characters that a screen does not show as they are; the first is U+202E.',
  },
} satisfies Record<ReviewKind, Explanation>;
