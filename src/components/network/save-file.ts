/** Hands a text made in the browser to the person as a file. */
export function saveFile(name: string, mediaType: string, content: BlobPart): void {
  const url = URL.createObjectURL(new Blob([content], { type: mediaType }));
  const link = document.createElement('a');
  link.href = url;
  link.download = name;
  link.click();
  // The download holds on to the content by itself; a moment later the address is not needed any more.
  setTimeout(() => URL.revokeObjectURL(url), 10_000);
}
