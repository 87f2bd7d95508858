/** One POST over a kept connection; a board posts many times a second, which fetch makes dear. */
import http from 'node:http';
import https from 'node:https';

export type HttpReply = { status: number; retryAfter: string | null; body: string };
/** Rejects on a network error. */
export type HttpPost = (url: string, headers: Record<string, string>, body: Uint8Array) => Promise<HttpReply>;

const timeoutMs = 15_000;
const maxReplyBytes = 1024 * 1024;

export function createHttpPost(): HttpPost {
  const options = { keepAlive: true, maxSockets: 1 };
  const plain = new http.Agent(options);
  const secure = new https.Agent(options);
  return (url, headers, body) =>
    new Promise((resolve, reject) => {
      const isSecure = url.startsWith('https:');
      const request = (isSecure ? https : http).request(url, {
        method: 'POST',
        agent: isSecure ? secure : plain,
        headers: { ...headers, 'Content-Length': body.length },
        timeout: timeoutMs,
      });
      request.on('timeout', () => request.destroy(new Error(`no answer within ${timeoutMs / 1000} s`)));
      request.on('error', reject);
      request.on('response', (response) => {
        let text = '';
        response.setEncoding('utf8');
        response.on('data', (part: string) => {
          text += part;
          if (text.length > maxReplyBytes) request.destroy(new Error('the answer has no end'));
        });
        response.on('error', reject);
        response.on('end', () => {
          resolve({
            status: response.statusCode ?? 0,
            retryAfter: response.headers['retry-after'] ?? null,
            body: text,
          });
        });
      });
      request.end(body);
    });
}
