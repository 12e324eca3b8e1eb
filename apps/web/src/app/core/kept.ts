/** Small texts kept on this machine. A browser that keeps nothing for this page answers null and takes nothing. */
export function keptText(key: string): string | null {
  try {
    return localStorage.getItem(key);
  } catch (error) {
    return storageIsClosed(error, null);
  }
}

export function keepText(key: string, text: string): void {
  try {
    localStorage.setItem(key, text);
  } catch (error) {
    storageIsClosed(error, null);
  }
}

/** Browsers refuse storage with a DOMException (blocked, or full); anything else is a mistake of ours. */
function storageIsClosed<T>(error: unknown, answer: T): T {
  if (error instanceof DOMException) return answer;
  throw error;
}
