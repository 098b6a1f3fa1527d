/** The register as the screen asks it: a page at a time, found as letters are typed. */
import { resultText, standingText } from '../register/find.ts';
import { plainYaml } from '../register/plain-yaml.ts';
import type { Register } from '../register/register.edge.ts';
import type { RegisterView } from '../screens/views.ts';

/** @returns null for a register without entries */
export function registerView(register: Register): RegisterView | null {
  const index = register.index();
  if (index.total === 0) return null;
  return {
    total: index.total,
    find: (text, from, count) =>
      index
        .find({ text }, from, count)
        .map((one) => ({ id: one.id, date: one.day, result: one.result, standing: one.standing })),
    count: (text) => index.count({ text }),
    entry: (id) => {
      const entry = register.entry(id);
      if (entry === null) return ['this entry can not be read'];
      return [
        `${entry.id}  ${standingText(entry)}`,
        resultText(entry.content.result),
        '',
        ...plainYaml(JSON.parse(JSON.stringify(entry.content))).split('\n'),
      ];
    },
    notices: register
      .notices()
      .filter((one) => one.lifted === null)
      .map((one) => `${one.content.module} ${one.content.versions ?? ''}: ${one.content.title}`),
  };
}
