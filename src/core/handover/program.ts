/** The program's version as files name it; a test holds it to that of the package. */
export const PROGRAM_VERSION = '0.1.0';

export const PROGRAM = `Tiltwright ${PROGRAM_VERSION}`;
