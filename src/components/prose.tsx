import { memo, type ReactNode } from 'react';
import { Formula } from './formula.tsx';

/**
 * Prose of a notebook: paragraphs, headings (#, ##, ###), lists, quotations, *emphasis*, **strong**, `code`,
 * [links](https://…), $formulas$ and $$displayed formulas$$. Everything else is text; no markup of the writer's reaches the page.
 */
export const Prose = memo(function Prose({ text, level = 2 }: { text: string; level?: 2 | 3 }) {
  return <div className="prose measure">{blocksOf(text).map((block, k) => drawn(block, k, level))}</div>;
});

export type Block =
  | { readonly what: 'paragraph' | 'quotation'; readonly text: string }
  | { readonly what: 'heading'; readonly depth: number; readonly text: string }
  | { readonly what: 'display'; readonly text: string }
  | { readonly what: 'list'; readonly ordered: boolean; readonly items: readonly string[] };

/** Cuts prose into blocks at blank lines and at the marks that begin one. */
export function blocksOf(text: string): readonly Block[] {
  const blocks: Block[] = [];
  for (const chunk of text.split(/\n\s*\n/)) {
    const lines = chunk.split('\n').filter((line) => line.trim() !== '');
    let open: string[] = [];
    const close = () => {
      if (open.length > 0) blocks.push(paragraph(open));
      open = [];
    };
    for (const line of lines) {
      const heading = /^(#{1,3})\s+(.*)$/.exec(line);
      const item = /^\s*(?:([-*])|\d+[.)])\s+(.*)$/.exec(line);
      if (heading) {
        close();
        blocks.push({ what: 'heading', depth: heading[1]?.length ?? 1, text: heading[2] ?? '' });
      } else if (item) {
        close();
        addItem(blocks, item[1] === undefined, item[2] ?? '');
      } else open.push(line.trim());
    }
    close();
  }
  return blocks;
}

function addItem(blocks: Block[], ordered: boolean, text: string) {
  const last = blocks.at(-1);
  if (last?.what === 'list' && last.ordered === ordered)
    blocks[blocks.length - 1] = { ...last, items: [...last.items, text] };
  else blocks.push({ what: 'list', ordered, items: [text] });
}

function paragraph(lines: readonly string[]): Block {
  const text = lines.join(' ');
  const display = /^\$\$(.+)\$\$$/.exec(text);
  if (display) return { what: 'display', text: display[1] ?? '' };
  if (lines.every((line) => line.startsWith('>')))
    return { what: 'quotation', text: lines.map((line) => line.replace(/^>\s?/, '')).join(' ') };
  return { what: 'paragraph', text };
}

function drawn(block: Block, key: number, level: 2 | 3): ReactNode {
  if (block.what === 'heading') {
    const Tag = `h${String(Math.min(6, level + block.depth - 1))}` as 'h2';
    return <Tag key={key}>{inline(block.text)}</Tag>;
  }
  if (block.what === 'display')
    return (
      <p key={key} className="displayed">
        <Formula tex={block.text} display />
      </p>
    );
  if (block.what === 'list') {
    const Tag = block.ordered ? 'ol' : 'ul';
    return (
      <Tag key={key}>
        {block.items.map((item, k) => (
          <li key={k}>{inline(item)}</li>
        ))}
      </Tag>
    );
  }
  if (block.what === 'quotation') return <blockquote key={key}>{inline(block.text)}</blockquote>;
  return <p key={key}>{inline(block.text)}</p>;
}

const marks =
  /(?<!\\)\$((?:\\.|[^$\\])+?)\$|`([^`]+)`|\*\*(\S(?:.*?\S)?)\*\*|\*(\S(?:.*?\S)?)\*|\[([^\]]+)\]\((https?:\/\/[^\s)]+)\)/;

/** Sets the marks within a line; nested ones too. */
export function inline(text: string): ReactNode {
  const match = marks.exec(text);
  if (!match) return text.replace(/\\([$*`\\])/g, '$1');
  const [whole, math, code, strong, emphasis, label, href] = match;
  return (
    <>
      {text.slice(0, match.index).replace(/\\([$*`\\])/g, '$1')}
      {math !== undefined && <Formula tex={math} />}
      {code !== undefined && <code className="code">{code}</code>}
      {strong !== undefined && <strong>{inline(strong)}</strong>}
      {emphasis !== undefined && <em>{inline(emphasis)}</em>}
      {label !== undefined && (
        <a href={href} rel="noreferrer noopener">
          {inline(label)}
        </a>
      )}
      {inline(text.slice(match.index + whole.length))}
    </>
  );
}
