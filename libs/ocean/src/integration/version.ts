/**
 * Version of the numerical core: raised whenever a change can alter the bits of a result, so that an old fingerprint
 * says "another core version" and not "failed" (numerics.md §7).
 */
export const CORE_VERSION = '2';
