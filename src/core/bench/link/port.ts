/** A serial port as the core sees one. The app puts the browser's behind it, the tests a device made of code. */
export interface SerialPort {
  /** Resolves once the bytes are handed over; rejects when the port is gone. */
  write(bytes: Uint8Array): Promise<void>;
  /** Bytes in the order received; returns a function that ends the subscription. */
  onBytes(listen: (bytes: Uint8Array) => void): () => void;
  /** Called once when the port is gone, whether closed or unplugged. */
  onGone(listen: () => void): () => void;
  close(): Promise<void>;
}
