/* global __dirname -- a CommonJS file */
const http = require('node:http');
const { getDefaultConfig } = require('expo/metro-config');

const config = getDefaultConfig(__dirname);

config.resolver.assetExts.push('woff2', 'wasm');

/** Rooms that are no part of the app: never crawled, watched or bundled. */
const otherRooms = ['server', 'broker', 'simulators', 'tests', 'data', 'dist', 'docs', 'scripts', '.ci'];
const escapedRoot = __dirname.replace(/[/\\^$*+?.()|[\]{}]/g, '\\$&');
config.resolver.blockList = [
  ...[config.resolver.blockList ?? []].flat(),
  new RegExp(`^${escapedRoot}[/\\\\](?:${otherRooms.map((room) => room.replace('.', '\\.')).join('|')})(?:[/\\\\].*)?$`),
];

// While working on the app, Metro serves the pages, and everything below /api is passed on to the server.
const serverPort = Number(process.env.PORT ?? 4000);

function passOn(request, response) {
  const headers = { ...request.headers, host: `127.0.0.1:${serverPort}` };
  const onward = http.request({ host: '127.0.0.1', port: serverPort, method: request.method, path: request.url, headers }, (answer) => {
    response.writeHead(answer.statusCode ?? 502, answer.headers);
    answer.pipe(response);
  });
  onward.on('error', () => {
    response.writeHead(502, { 'content-type': 'application/problem+json' });
    response.end(JSON.stringify({ type: 'about:blank', title: 'No server', status: 502, detail: 'Start the server first.' }));
  });
  request.pipe(onward);
}

/** Metro destroys upgrades that it does not know, so ours are taken out before they reach its listeners. */
function passOnUpgrades(listener) {
  const others = listener.listeners('upgrade');
  listener.removeAllListeners('upgrade');
  listener.on('upgrade', (request, socket, head) => {
    if (!request.url.startsWith('/api/')) {
      for (const other of others) other.call(listener, request, socket, head);
      return;
    }
    const headers = { ...request.headers, host: `127.0.0.1:${serverPort}` };
    const onward = http.request({ host: '127.0.0.1', port: serverPort, path: request.url, headers });
    onward.on('upgrade', (answer, serverSocket, serverHead) => {
      const lines = Object.entries(answer.headers).map(([name, value]) => `${name}: ${value}`);
      socket.write(['HTTP/1.1 101 Switching Protocols', ...lines, '', ''].join('\r\n'));
      if (serverHead.length > 0) socket.write(serverHead);
      if (head.length > 0) serverSocket.write(head);
      serverSocket.pipe(socket).pipe(serverSocket);
      serverSocket.on('error', () => socket.destroy());
      socket.on('error', () => serverSocket.destroy());
    });
    onward.on('error', () => socket.destroy());
    onward.on('response', () => socket.destroy());
    onward.end();
  });
}

const known = new WeakSet();
config.server.enhanceMiddleware = (middleware) => (request, response, next) => {
  const listener = request.socket.server;
  if (listener !== undefined && !known.has(listener)) {
    known.add(listener);
    passOnUpgrades(listener);
  }
  if (request.url.startsWith('/api/')) passOn(request, response);
  else middleware(request, response, next);
};

module.exports = config;
