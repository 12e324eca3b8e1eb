import { canonicalJson, sha256Hex } from '../exact/bytes';
import type { Setup } from '../setup';

/** SHA-256 (64 hex digits) of a setup as JSON with sorted keys: the same for equal setups, however their file was written. */
export function setupSha256(setup: Setup): string {
  return sha256Hex(new TextEncoder().encode(canonicalJson(setup)));
}
