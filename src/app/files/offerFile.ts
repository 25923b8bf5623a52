/** A file name made of a title: letters, digits and hyphens, whatever the title was. */
export function fileNameFor(title: string, ending: string): string {
  const plain = title
    .normalize('NFKD')
    .replace(/[^\p{L}\p{N}]+/gu, '-')
    .replace(/^-+|-+$/g, '')
    .toLowerCase();
  return `${plain.slice(0, 60) || 'rig'}.${ending}`;
}

/** Hands a text or bytes to the browser as a file to be saved. */
export function offerFile(name: string, content: BlobPart, type: string): void {
  const address = URL.createObjectURL(new Blob([content], { type }));
  const link = document.createElement('a');
  link.href = address;
  link.download = name;
  document.body.append(link);
  link.click();
  link.remove();
  // The browser has taken its own hold of the bytes by the next turn of its loop.
  setTimeout(() => URL.revokeObjectURL(address), 10_000);
}
