/** Version of the engine, sealed into the claims of an edition: to be raised when an answer may change. */
export const engineVersion = '1';
