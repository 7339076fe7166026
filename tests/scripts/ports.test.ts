import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { describe, expect, it } from 'vitest';
import { findFreePort, isPortFree, portInUseSentence, waitUntilAnswering } from '../../scripts/lib/ports.mjs';

async function listening() {
  const server = createServer((_, response) => response.writeHead(503).end());
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  return { port, close: () => new Promise((resolve) => server.close(resolve)) };
}

describe('ports', () => {
  it('sees that a port is taken, and that it is free again', async () => {
    const { port, close } = await listening();
    expect(await isPortFree(port)).toBe(false);
    await close();
    expect(await isPortFree(port)).toBe(true);
  });

  it('keeps the remembered port while it is free and leaves it when it is taken', async () => {
    const free = await findFreePort();
    expect(await findFreePort(free)).toBe(free);
    const { port, close } = await listening();
    expect(await findFreePort(port)).not.toBe(port);
    await close();
  });

  it('names the port in use, that nothing was started, and the command for another one', () => {
    const sentence = portInUseSentence(4180);
    expect(sentence).toContain('Port 4180 is in use');
    expect(sentence).toContain('nothing was started');
    expect(sentence).toContain('npm start -- --port 4181');
    expect(portInUseSentence(65535)).toContain('--port 65534');
  });

  it('takes any answer as a sign of life, an error page too', async () => {
    const { port, close } = await listening();
    expect(await waitUntilAnswering(`http://127.0.0.1:${port}/`, { timeoutMs: 5000 })).toBe(true);
    await close();
  });

  it('stops waiting when the program is gone', async () => {
    const port = await findFreePort();
    const options = { timeoutMs: 60_000, gone: () => true };
    expect(await waitUntilAnswering(`http://127.0.0.1:${port}/`, options)).toBe(false);
  });
});
