/** Path of a browser that runs; throws an error that says what to do when there is none. */
export function ensureChromium(): Promise<string>;
