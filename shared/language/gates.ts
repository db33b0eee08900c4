/** How many spins each gate acts on, by its OpenQASM 3 name; what a gate does stands in algebra/pauli/clifford. */
const arities: ReadonlyMap<string, number> = new Map([
  ...['h', 's', 'sdg', 'x', 'y', 'z'].map((name) => [name, 1] as const),
  ...['cx', 'cy', 'cz', 'swap'].map((name) => [name, 2] as const),
]);
export const gateNames: readonly string[] = [...arities.keys()];
export const gateArity = (name: string): number | undefined => arities.get(name);
