import { openFile } from './keeping';

/** Opens a rig file that is dropped anywhere on the page. Returns the way to stop. */
export function takeDroppedFiles(page: HTMLElement): () => void {
  const allow = (event: DragEvent): void => {
    if (event.dataTransfer?.types.includes('Files')) event.preventDefault();
  };
  const take = (event: DragEvent): void => {
    const file = event.dataTransfer?.files[0];
    if (!file) return;
    event.preventDefault();
    void openFile(file);
  };
  page.addEventListener('dragover', allow);
  page.addEventListener('drop', take);
  return () => {
    page.removeEventListener('dragover', allow);
    page.removeEventListener('drop', take);
  };
}
