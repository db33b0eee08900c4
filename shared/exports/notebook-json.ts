import type { NotebookFile } from '../contracts/exchange.ts';

/** A notebook as JSON, indented by two; an upload reads it back. Its JSON Schema stands in contracts/exchange. */
export const notebookJson = (file: NotebookFile): string => `${JSON.stringify(file, null, 2)}\n`;
