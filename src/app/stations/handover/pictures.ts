/** Pictures as PNG: the stage as it is seen, and plots drawn from their SVG. */
import type { HandoverFile } from '../../../core/handover';

/** Pixels for each of the drawing's own: sharp on paper and on dense screens. */
const DENSITY = 2;

/** An SVG text as PNG bytes on white. Rejects when the browser cannot draw it. */
export async function drawPng(svg: Uint8Array): Promise<Blob> {
  const address = URL.createObjectURL(new Blob([svg.slice()], { type: 'image/svg+xml' }));
  try {
    const image = new Image();
    image.src = address;
    await image.decode();
    const canvas = document.createElement('canvas');
    canvas.width = DENSITY * image.naturalWidth;
    canvas.height = DENSITY * image.naturalHeight;
    const context = canvas.getContext('2d');
    if (!context) throw new Error('this browser has no canvas to draw on');
    context.fillStyle = '#ffffff';
    context.fillRect(0, 0, canvas.width, canvas.height);
    context.drawImage(image, 0, 0, canvas.width, canvas.height);
    return await new Promise((resolve, reject) => {
      canvas.toBlob(
        (blob) => (blob ? resolve(blob) : reject(new Error('the picture is too large'))),
        'image/png',
      );
    });
  } finally {
    URL.revokeObjectURL(address);
  }
}

/** The stage as it is seen now. Rejects where there is no stage. */
export async function takeStage(): Promise<Blob> {
  const { captureStage } = await import('../../stage');
  return captureStage();
}

export const pngName = (name: string): string => name.replace(/\.svg$/, '.png');

/** Every picture there is as PNG; without the stage where this browser draws none. */
export async function drawAllPictures(
  files: readonly HandoverFile[],
  stageName: string,
): Promise<readonly { readonly name: string; readonly bytes: Uint8Array }[]> {
  const blobs: { name: string; blob: Blob }[] = [];
  const stage = await takeStage().catch(() => undefined);
  if (stage) blobs.push({ name: stageName, blob: stage });
  for (const { name, type, bytes } of files) {
    if (type === 'image/svg+xml') blobs.push({ name: pngName(name), blob: await drawPng(bytes) });
  }
  return Promise.all(
    blobs.map(async ({ name, blob }) => ({ name, bytes: new Uint8Array(await blob.arrayBuffer()) })),
  );
}
