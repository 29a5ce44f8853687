/** Lets the browser save a file made on this page. */
export function saveBlob(blob: Blob, fileName: string) {
  const url = URL.createObjectURL(blob);
  const link = document.createElement('a');
  link.href = url;
  link.download = fileName;
  document.body.append(link);
  link.click();
  link.remove();
  // Freed only after the browser has begun to read it.
  setTimeout(() => URL.revokeObjectURL(url), 10_000);
}
