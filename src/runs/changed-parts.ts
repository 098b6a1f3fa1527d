/** What one commit changed, cut into parts that can be taken back one by one: by module, then by procedure. Pure. */
import type { ManifestSet } from '../model/manifest.ts';
import type { KeyedFile } from './key.ts';

/** Files that belong together: those of a module, or all that no module declares. */
export interface ChangedGroup {
  /** Module name; null for files of no module. */
  readonly module: string | null;
  readonly files: readonly string[];
}

/** Files whose content or mode differs between two trees, by the module that declares them. */
export function changedGroups(
  before: readonly KeyedFile[],
  after: readonly KeyedFile[],
  manifests: readonly ManifestSet[],
): ChangedGroup[] {
  const owner = new Map<string, string>();
  for (const set of manifests) {
    for (const { value } of set.modules.values()) {
      for (const file of [...value.source.files, ...(value.tables ?? []).map((table) => table.file)]) {
        if (!owner.has(file)) owner.set(file, value.module);
      }
    }
  }
  const groups = new Map<string | null, string[]>();
  for (const file of changedFiles(before, after)) {
    const module = owner.get(file) ?? null;
    groups.set(module, [...(groups.get(module) ?? []), file]);
  }
  return [...groups].map(([module, files]) => ({ module, files }));
}

export function changedFiles(before: readonly KeyedFile[], after: readonly KeyedFile[]): string[] {
  const [old, now] = [before, after].map(
    (files) => new Map(files.map((file) => [file.path, `${file.mode} ${file.id}`])),
  );
  const names = new Set([...old!.keys(), ...now!.keys()]);
  return [...names].filter((name) => old!.get(name) !== now!.get(name)).sort();
}

/** Where a procedure stands in a text, lines from 1, both ends included. */
export interface ProcedureSpan {
  readonly name: string;
  readonly line: number;
  readonly endLine: number;
}

/** A part of a changed file: one procedure, or null for all that stands outside the procedures in both versions. */
export interface ChangedPart {
  readonly file: string;
  readonly procedure: string | null;
}

interface CutText {
  /** Lines, each with its line end. */
  readonly lines: readonly string[];
  /** Innermost procedures only, in order. */
  readonly spans: readonly ProcedureSpan[];
}

/** One file in both versions, ready for any of its procedures to be taken back. */
export class ChangedText {
  readonly file: string;
  readonly parts: readonly ChangedPart[];
  private readonly before: CutText;
  private readonly after: CutText;

  /** Texts are taken as Latin-1, so that any bytes come out as they went in. */
  constructor(
    file: string,
    before: { readonly text: string; readonly spans: readonly ProcedureSpan[] },
    after: { readonly text: string; readonly spans: readonly ProcedureSpan[] },
  ) {
    this.file = file;
    this.before = cut(before.text, before.spans);
    this.after = cut(after.text, after.spans);
    const shared = this.after.spans.filter((span) => textOf(this.before, span.name) !== null);
    const changed = shared.filter((span) => textOf(this.before, span.name) !== textOf(this.after, span.name));
    const parts: ChangedPart[] = changed.map((span) => ({ file, procedure: span.name }));
    if (outside(this.before, shared) !== outside(this.after, shared)) parts.push({ file, procedure: null });
    this.parts = parts;
  }

  /** The new text with these parts as they were before. */
  takenBack(parts: readonly ChangedPart[]): string {
    const own = parts.filter((part) => part.file === this.file);
    const old = new Set(own.map((part) => part.procedure));
    const [frame, other] = old.has(null) ? [this.before, this.after] : [this.after, this.before];
    // Which version the frame does not have is what is put in.
    const changed = new Set(this.parts.map((part) => part.procedure));
    let text = '';
    let line = 1;
    for (const span of frame.spans) {
      text += frame.lines.slice(line - 1, span.line - 1).join('');
      const wantsOther = changed.has(span.name) && (frame === this.after ? old.has(span.name) : !old.has(span.name));
      text += (wantsOther ? textOf(other, span.name) : null) ?? frame.lines.slice(span.line - 1, span.endLine).join('');
      line = span.endLine + 1;
    }
    return text + frame.lines.slice(line - 1).join('');
  }
}

function cut(text: string, spans: readonly ProcedureSpan[]): CutText {
  const lines = text.match(/[^\n]*\n|[^\n]+$/g) ?? [];
  const sound = spans.filter((span) => span.line >= 1 && span.endLine >= span.line && span.endLine <= lines.length);
  // A procedure that holds others is cut at those; one name twice (overloads, stubs) cannot be told apart and stays in the frame.
  const innermost = sound.filter(
    (span) => !sound.some((one) => one !== span && one.line >= span.line && one.endLine <= span.endLine),
  );
  const once = innermost.filter((span) => innermost.filter((one) => one.name === span.name).length === 1);
  const apart: ProcedureSpan[] = [];
  for (const span of once.sort((a, b) => a.line - b.line))
    if (span.line > (apart.at(-1)?.endLine ?? 0)) apart.push(span);
  return { lines, spans: apart };
}

function textOf(text: CutText, name: string): string | null {
  const span = text.spans.find((one) => one.name === name);
  return span === undefined ? null : text.lines.slice(span.line - 1, span.endLine).join('');
}

/** The text with the bodies of shared procedures left out, their places marked. */
function outside(text: CutText, shared: readonly ProcedureSpan[]): string {
  const names = new Set(shared.map((span) => span.name));
  let result = '';
  let line = 1;
  for (const span of text.spans.filter((one) => names.has(one.name))) {
    result += `${text.lines.slice(line - 1, span.line - 1).join('')}\0${span.name}\0`;
    line = span.endLine + 1;
  }
  return result + text.lines.slice(line - 1).join('');
}
