import type { AssistAnswer, AssistQuestion } from '../contracts/assist.ts';
import { completions, declaration, formatSource, hover, rename, writeOut } from '../language/assist.ts';
import { evaluateSource, type Program } from '../language/evaluate.ts';
import { buildMap } from '../maps/registry.ts';

/** Answers what an editor asks; keeps what did not change between one text and the next. */
export interface Assistant {
  answer(text: string, question: AssistQuestion): AssistAnswer;
}

const edited = (ask: 'rename' | 'write out', made: ReturnType<typeof rename>): AssistAnswer =>
  'message' in made
    ? { ask, edits: [], refused: [made.message, made.hint].filter((words) => words !== '').join(' ') }
    : { ask, edits: made, refused: null };

export function newAssistant(): Assistant {
  let program: Program | undefined;
  const read = (text: string): Program => {
    if (program?.source !== text) program = evaluateSource(text, { buildMap }, program);
    return program;
  };
  return {
    answer(text, question) {
      switch (question.ask) {
        case 'completions':
          return { ask: question.ask, completions: completions(read(text), question.at) };
        case 'hover':
          return { ask: question.ask, hover: hover(read(text), question.at) ?? null };
        case 'declaration':
          return { ask: question.ask, place: declaration(read(text), question.at) ?? null };
        case 'rename':
          return edited(question.ask, rename(read(text), question.at, question.to));
        case 'write out':
          return edited(question.ask, writeOut(read(text), question.at));
        case 'format':
          return { ask: question.ask, text: formatSource(text) };
      }
    },
  };
}
