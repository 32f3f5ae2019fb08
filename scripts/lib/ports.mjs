import net from 'node:net';

/** Whether nothing listens on this loopback port; 0 asks the system for any free one. */
function tryPort(port, host) {
  return new Promise((resolve) => {
    const server = net.createServer();
    server.once('error', () => resolve(null));
    server.listen(port, host, () => {
      const found = server.address().port;
      server.close(() => resolve(found));
    });
  });
}

export async function freePort(host = '127.0.0.1') {
  return tryPort(0, host);
}

/** The wanted port, or an error naming PORT when somebody chose it and it is taken. */
export async function servePort(chosen, host = '127.0.0.1') {
  if (chosen !== undefined) {
    const port = Number(chosen);
    if (!Number.isInteger(port) || port < 1 || port > 65535) {
      throw new Error(`PORT is ${chosen}; it must be a whole number from 1 to 65535.`);
    }
    if ((await tryPort(port, host)) === null) {
      throw new Error(`Port ${port} is taken. Set PORT to a free one, or end what listens there.`);
    }
    return port;
  }
  for (let port = 3000; port < 3020; port++) {
    if ((await tryPort(port, host)) !== null) return port;
  }
  return freePort(host);
}
