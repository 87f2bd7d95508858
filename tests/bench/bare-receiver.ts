/** The cheapest thing that can receive the same messages: a WebSocket server that counts bytes. */
import { WebSocketServer } from 'ws';

const server = new WebSocketServer({ port: 0, host: '127.0.0.1', perMessageDeflate: false });
let bytes = 0;
server.on('connection', (socket) => {
  socket.on('message', (data: Buffer) => {
    bytes += data.length;
  });
});
server.on('listening', () => {
  const address = server.address();
  process.stdout.write(`listening ${typeof address === 'object' ? address?.port : ''}\n`);
});
process.once('SIGTERM', () => {
  process.stdout.write(`${bytes} bytes\n`);
  process.exit(0);
});
