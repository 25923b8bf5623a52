/** Serves the built app on the loopback address and prints where. Usage: node tools/serve.mjs [port] */
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { preview } from 'vite';

const root = fileURLToPath(new URL('..', import.meta.url));
const port = Number(process.argv[2] ?? process.env.PORT ?? 4173);

if (!existsSync(`${root}/dist/index.html`)) {
  console.error('There is no dist/index.html to serve. Run "npm run build" first, or "npm start" for both.');
  process.exit(1);
}
if (!Number.isInteger(port) || port < 1 || port > 65535) {
  console.error(`"${process.argv[2] ?? process.env.PORT}" is no port: give a whole number from 1 to 65535.`);
  process.exit(1);
}

const server = await preview({ root, preview: { port, strictPort: false } });
const address = server.httpServer.address();
console.log(
  `Tiltwright is at http://127.0.0.1:${typeof address === 'object' && address ? address.port : port}/`,
);
console.log('Stop with Ctrl+C.');
