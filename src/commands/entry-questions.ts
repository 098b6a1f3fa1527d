/** What an entry needs and no file tells, asked on the terminal. An empty answer leaves a thing out. */
import type { Questions } from './ask-line.edge.ts';

/** Answers under the names of the options that give the same. */
export interface EntryAnswers {
  readonly [option: string]: string | readonly string[];
}

const ONCE: readonly (readonly [string, string])[] = [
  ['title', 'What is the result called? '],
  ['doi', 'Its DOI, if it has one: '],
  ['arxiv', 'Its arXiv id, if it has one: '],
  ['figure', 'Figure number in the publication: '],
  ['table', 'Table number in the publication: '],
  ['published', 'Day of publication, YYYY-MM-DD: '],
];

const SEVERAL: readonly (readonly [string, string])[] = [
  ['person', 'Who made it: "Name, ORCID iD, role" (empty ends): '],
  ['output', 'A file with the result, whose digest is kept (empty ends): '],
  ['input', 'An input file (empty ends): '],
];

/**
 * @param told  options that were given already and are not asked for
 * @returns null when the answers are not to be recorded
 */
export async function askEntry(
  questions: Questions,
  told: (option: string) => boolean,
  filledIn: string,
): Promise<EntryAnswers | null> {
  const answers: Record<string, string | readonly string[]> = {};
  for (const [option, question] of ONCE) {
    if (told(option)) continue;
    const answer = await questions.ask(question);
    if (answer !== '') answers[option] = answer;
  }
  for (const [option, question] of SEVERAL) {
    if (told(option)) continue;
    const all: string[] = [];
    for (let answer = await questions.ask(question); answer !== ''; answer = await questions.ask(question))
      all.push(answer);
    if (all.length > 0) answers[option] = all;
  }
  if (!told('note')) {
    const note = await questions.ask('Anything a successor should know: ');
    if (note !== '') answers.note = note;
  }
  return (await questions.ask(`${filledIn}Record it? Type yes: `)) === 'yes' ? answers : null;
}
