/** Hands bytes or text to the browser as a file to keep. */
export function download(name: string, content: BlobPart, type: string): void {
  const address = URL.createObjectURL(new Blob([content], { type }));
  const link = document.createElement('a');
  link.href = address;
  link.download = name;
  link.click();
  // The click has only begun the download.
  setTimeout(() => URL.revokeObjectURL(address), 60_000);
}
