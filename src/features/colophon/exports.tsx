import { useState } from 'react';
import { Choice, Field } from '../../components/parts.tsx';

/** The formats that a derivation goes out in, each with its words and the ending of its file. */
const formats = {
  gw: ['operator language', 'gw'],
  json: ['JSON, with its schema', 'json'],
  article: ['LaTeX article', 'tex'],
  annotations: ['remarks as Web Annotations', 'json'],
  bibtex: ['citation, BibTeX', 'bib'],
  cff: ['citation, CITATION.cff', 'cff'],
  'pauli-csv': ['Hamiltonian as Pauli strings, CSV', 'csv'],
  'matrix-market': ['Hamiltonian as a sparse matrix, Matrix Market', 'mtx'],
  openqasm: ['circuit, OpenQASM 3', 'qasm'],
} as const;
export type Format = keyof typeof formats;

const whole: readonly Format[] = ['gw', 'json', 'article', 'annotations'];
export const draftFormats: readonly Format[] = [...whole, 'pauli-csv', 'matrix-market', 'openqasm'];
export const editionFormats: readonly Format[] = [...whole, 'bibtex', 'cff', 'pauli-csv', 'matrix-market', 'openqasm'];
export const linkedFormats: readonly Format[] = editionFormats.filter((format) => format !== 'annotations');

interface Props {
  readonly addressOf: (format: Format, query: Readonly<Record<string, string | undefined>>) => string;
  readonly formats: readonly Format[];
  /** The file's name without its ending. */
  readonly name: string;
}

const ofPart: readonly Format[] = ['pauli-csv', 'matrix-market', 'openqasm'];

/** Takes a derivation out in one of the formats; those of a model or a circuit take its name and a size. */
export function Exports({ addressOf, formats: offered, name }: Props) {
  const [format, setFormat] = useState<Format>('gw');
  const [of, setOf] = useState('');
  const [size, setSize] = useState('');
  const partly = ofPart.includes(format);
  const query = partly ? { of: of.trim() || undefined, size: size.trim() || undefined } : {};
  return (
    <div className="flex flex-wrap items-end gap-x-6 gap-y-2">
      <Choice
        label="Export as"
        value={format}
        options={offered.map((one) => [one, formats[one][0]] as const)}
        choose={setFormat}
      />
      {partly && (
        <>
          <Field
            label={format === 'openqasm' ? 'map (the first, if left out)' : 'model (the first, if left out)'}
            value={of}
            set={setOf}
            className="w-52"
          />
          <Field
            label="size (as declared, if left out)"
            placeholder="3 x 3"
            value={size}
            set={setSize}
            className="w-52"
          />
        </>
      )}
      <a className="act" href={addressOf(format, query)} download={`${name}.${formats[format][1]}`}>
        fetch the file
      </a>
    </div>
  );
}
