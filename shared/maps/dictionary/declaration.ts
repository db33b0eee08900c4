import type { MapDeclaration } from '../../language/values.ts';

export type DictionaryDeclaration = Extract<MapDeclaration, { kind: 'dictionary' }>;
