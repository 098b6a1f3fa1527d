/** What comparisons need of a reading: the interface without the rest, and what each procedure does. Pure. */
import type { FileInterface, Language } from '../model/interface.ts';
import { decodeText } from '../sources/git-object.ts';
import { type ProcedureBody, procedureBody } from './fingerprint.ts';

/** What each procedure of a file does, by the line it begins at. Nothing is made before it is asked for. */
export interface Bodies {
  get(line: number): ProcedureBody | undefined;
  values(): Iterable<ProcedureBody>;
}

export function bodiesOf(code: FileInterface, bytes: Uint8Array): Bodies {
  if (code.procedures.length === 0 || code.language === 'table') return new Map();
  let made: Map<number, ProcedureBody> | null = null;
  const all = () => {
    made ??= cut(code, bytes);
    return made;
  };
  return { get: (line) => all().get(line), values: () => all().values() };
}

function cut(code: FileInterface, bytes: Uint8Array): Map<number, ProcedureBody> {
  const text = decodeText(bytes);
  const starts = lineStarts(text);
  return new Map(
    code.procedures.map(({ name, line, endLine }) => {
      const written = text.slice(starts[line - 1] ?? 0, starts[endLine] ?? text.length);
      return [line, new WrittenBody(name, written, code.language, code.form)];
    }),
  );
}

/** Most bodies are only seen to be what they were: their fingerprints are made when one differs. */
class WrittenBody implements ProcedureBody {
  readonly name: string;
  readonly written: string;
  private readonly language: Language;
  private readonly sourceForm: 'fixed' | 'free' | undefined;
  private made: ProcedureBody | null = null;

  constructor(name: string, written: string, language: Language, form: 'fixed' | 'free' | undefined) {
    this.name = name;
    this.written = written;
    this.language = language;
    this.sourceForm = form;
  }

  get hash(): string {
    return this.body().hash;
  }

  get form(): string {
    return this.body().form;
  }

  get prints(): readonly number[] {
    return this.body().prints;
  }

  get tokens(): number {
    return this.body().tokens;
  }

  private body(): ProcedureBody {
    this.made ??= procedureBody(this.name, this.written, this.language, this.sourceForm);
    return this.made;
  }
}

function lineStarts(text: string): number[] {
  const starts = [0];
  for (let at = text.indexOf('\n'); at >= 0; at = text.indexOf('\n', at + 1)) starts.push(at + 1);
  return starts;
}

/** Calls, storage and files read are most of an interface and are not compared. */
export function comparable(code: FileInterface): FileInterface {
  return { ...code, calls: [], storage: [], externals: [], uses: [], includes: [] };
}
