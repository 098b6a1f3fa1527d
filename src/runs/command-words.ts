/** A declared command, as text, becomes the words of a process with its places filled in. No shell ever sees it. */

/** A command whose words cannot be made out; the message says where and what to write. */
export class CommandMistake extends Error {
  override readonly name = 'CommandMistake';
}

/**
 * Splits a command into words at blanks. Single quotes keep everything; double quotes keep everything but `\"` and `\\`;
 * outside quotes a backslash keeps the next character. `$`, `*`, `|`, `>`, `;` and `&` are ordinary characters.
 *
 * @throws {CommandMistake} for an open quote, a backslash at the end, or no word at all
 */
export function splitCommand(command: string): string[] {
  const words: string[] = [];
  let word: string | null = null;
  let quote: '"' | "'" | null = null;
  for (let i = 0; i < command.length; i++) {
    const character = command[i]!;
    if (quote === "'") {
      if (character === "'") quote = null;
      else word += character;
    } else if (quote === '"') {
      if (character === '"') quote = null;
      else if (character === '\\' && (command[i + 1] === '"' || command[i + 1] === '\\')) word += command[++i]!;
      else word += character;
    } else if (character === "'" || character === '"') {
      quote = character;
      word ??= '';
    } else if (character === '\\') {
      if (i + 1 >= command.length) throw new CommandMistake(`the command ends in a backslash: ${command}`);
      word = (word ?? '') + command[++i]!;
    } else if (/\s/.test(character)) {
      if (word !== null) words.push(word);
      word = null;
    } else {
      word = (word ?? '') + character;
    }
  }
  if (quote !== null) throw new CommandMistake(`the command has an open ${quote}: ${command}`);
  if (word !== null) words.push(word);
  if (words.length === 0) throw new CommandMistake('the command is empty');
  return words;
}

/**
 * Fills `{out}`, `{root}`, `{select.NAME}` in every word. A value never makes a second word, whatever is in it.
 *
 * @param values  name within the braces to its text
 * @throws {CommandMistake} when a place has no value; braces around anything that is not a name stay as they are
 */
export function fillCommand(words: readonly string[], values: Readonly<Record<string, string>>): string[] {
  return words.map((word) =>
    word.replace(/\{(out|root|select\.[\w-]+)\}/g, (place, name: string) => {
      const value = Object.hasOwn(values, name) ? values[name] : undefined;
      if (value === undefined) {
        const known = Object.keys(values).map((one) => `{${one}}`);
        throw new CommandMistake(
          `${place} has no value here${known.length === 0 ? '' : ` (there are ${known.join(', ')})`}: ${words.join(' ')}`,
        );
      }
      return value;
    }),
  );
}
