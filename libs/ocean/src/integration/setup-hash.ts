import { canonicalJson, sha256Hex } from '../exact/bytes';
import type { Setup } from '../setup';

/** SHA-256 (64 hex digits) of a setup as JSON with sorted keys: the same for equal setups, however their file was written. */
export function setupSha256(setup: Setup): string {
  return sha256Hex(new TextEncoder().encode(canonicalJson(setup)));
}

/**
 * SHA-256 that names the bytes of a last state, as `Integration.stateSha256`; alone, so that a page that only checks a
 * file does not carry the whole core.
 */
export function stateSha256(state: Uint8Array): string {
  return sha256Hex(state);
}
