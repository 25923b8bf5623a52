import type { RootState } from '@react-three/fiber';

let root: RootState | undefined;

/** Called by the stage when its canvas comes and goes. */
export const holdForCapture = (state: RootState | undefined): void => {
  root = state;
};

/** The present view as a PNG. Rejects when there is no stage to take it of. */
export function captureStage(): Promise<Blob> {
  if (!root) return Promise.reject(new Error('There is no stage to take a picture of.'));
  const { gl, scene, camera } = root;
  // Drawn and read in one go: the browser clears the canvas once it has shown it.
  gl.render(scene, camera);
  return new Promise((resolve, reject) => {
    gl.domElement.toBlob(
      (blob) =>
        blob ? resolve(blob) : reject(new Error('The browser could not make a picture of the stage.')),
      'image/png',
    );
  });
}
