import { rmSync } from 'node:fs';

/** Removes the database and the runs of the end-to-end server, which has ended by now. */
export default function cleanUp(): void {
  const folder = process.env['HALFDEEP_E2E_VAR'];
  if (folder) rmSync(folder, { recursive: true, force: true });
}
