/** Path of a Chromium on this machine, or undefined. */
export function findChromium(): string | undefined;
/** Makes sure that there is one, or ends the process with the command that installs it. */
export function ensureChromium(): void;
