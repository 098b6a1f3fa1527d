/** The version of the program, set when it is built. */
declare const MORTISE_VERSION: string | undefined;

export function version(): string {
  return typeof MORTISE_VERSION === 'undefined' ? 'unbuilt' : MORTISE_VERSION;
}
