/** A sound manifest with the places of its parts. */
import type { Excerpt } from '../model/finding.ts';
import type { Declaration } from '../model/manifest.ts';
import type { Place } from '../model/place.ts';
import type { ManifestText, Span } from './manifest-text.ts';
import type { TreeNode } from './yaml-tree.ts';

export class ManifestDeclaration<T> implements Declaration<T> {
  readonly value: T;
  readonly source: ManifestText;
  private readonly root: TreeNode;

  constructor(value: T, source: ManifestText, root: TreeNode) {
    this.value = value;
    this.source = source;
    this.root = root;
  }

  get file(): string {
    return this.source.file;
  }

  placeOf(path: readonly (string | number)[], part: 'key' | 'value' = 'value'): Place {
    return this.source.placeAt(this.spanOf(path, part).start);
  }

  lineText(line: number): string {
    return this.source.lineText(line);
  }

  excerptOf(path: readonly (string | number)[], part: 'key' | 'value' = 'value'): Excerpt {
    return this.source.excerpt(this.spanOf(path, part));
  }

  /** Where a part stands; the nearest part that exists when there is no such one. */
  spanOf(path: readonly (string | number)[], part: 'key' | 'value' = 'value'): Span {
    let node = this.root;
    let span = headOf(node);
    for (const [depth, step] of path.entries()) {
      const last = depth === path.length - 1;
      if (node.is === 'map') {
        const entry = node.entries.get(String(step));
        if (entry === undefined) return span;
        node = entry.node;
        span = last && part === 'value' ? node.span : entry.key;
        if (last && part === 'value' && node.is !== 'scalar') span = node.is === 'map' ? entry.key : headOf(node);
      } else if (node.is === 'list') {
        const item = typeof step === 'number' ? node.items[step] : undefined;
        if (item === undefined) return span;
        node = item;
        span = node.is === 'scalar' ? node.span : headOf(node);
      } else {
        return span;
      }
    }
    return span;
  }
}

/** A collection is meant by its first key or its bracket, not by all of its lines. */
function headOf(node: TreeNode): Span {
  if (node.is === 'map') return node.entries.values().next().value?.key ?? firstCharacter(node.span);
  return node.is === 'list' ? firstCharacter(node.span) : node.span;
}

function firstCharacter(span: Span): Span {
  return { start: span.start, end: span.start + 1 };
}
