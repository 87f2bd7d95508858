/** The shortest way from a POST to a browser: hands on what was posted to every WebSocket, at once. */
import { createServer } from 'node:http';
import { WebSocketServer } from 'ws';

const server = createServer((request, response) => {
  const parts: Buffer[] = [];
  request.on('data', (part: Buffer) => parts.push(part));
  request.on('end', () => {
    response.writeHead(request.method === 'POST' ? 202 : 200, { 'Content-Type': 'text/html' }).end();
    if (request.method !== 'POST') return;
    const note = JSON.stringify({
      rigId: request.headers['x-rig'],
      streamS: Number(request.headers['x-end']),
    });
    for (const viewer of viewers.clients) viewer.send(note);
  });
});
const viewers = new WebSocketServer({ server, perMessageDeflate: false });
server.listen(0, '127.0.0.1', () => {
  const address = server.address();
  process.stdout.write(`listening ${typeof address === 'object' ? address?.port : ''}\n`);
});
