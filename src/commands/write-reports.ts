/** `--report FILE`: the report in the form that the file's suffix names. */
import { explanations } from '../report/explanations/all.ts';
import type { Report } from '../report/report.ts';
import { reportHtml } from '../report/report-html.ts';
import { reportJson } from '../report/report-json.ts';
import { reportJunit } from '../report/report-junit.ts';
import { reportMarkdown } from '../report/report-markdown.ts';
import { reportSarif } from '../report/report-sarif.ts';
import { reportText } from '../report/report-text.ts';
import { type Surroundings, UsageError } from './command.ts';
import { writeWhole } from './files.edge.ts';
import { version } from './version.ts';

type Form = (report: Report) => string;

const FORMS: Readonly<Record<string, Form>> = {
  '.txt': (report) => reportText(report, { width: 100, colour: false }),
  '.md': reportMarkdown,
  '.html': reportHtml,
  '.sarif': (report) => reportSarif(report, version(), explanations),
  '.xml': reportJunit,
  '.json': (report) => reportJson(report, version()),
};

/** Call before a long piece of work, so that a wrong suffix does not waste it. @throws {UsageError} for a suffix that no form has */
export function checkReports(files: readonly string[]): void {
  for (const file of files) formOf(file);
}

/** @throws {UsageError} for a suffix that no form has, before anything is written */
export async function writeReports(
  report: Report,
  files: readonly string[],
  surroundings: Surroundings,
): Promise<void> {
  const chosen = files.map((file) => ({ file, form: formOf(file) }));
  for (const { file, form } of chosen) await writeWhole(surroundings.cwd, file, form(report));
}

function formOf(file: string): Form {
  const suffix = /\.[a-z]+$/i.exec(file)?.[0].toLowerCase() ?? '';
  const form = FORMS[suffix];
  if (form === undefined)
    throw new UsageError(`--report ${file}: the suffix tells the form, one of ${Object.keys(FORMS).join(' ')}`);
  return form;
}
