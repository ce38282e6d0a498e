// A static server for a folder on this machine only; sends gzip where it lies ready.
import http from 'node:http';
import fs from 'node:fs';
import path from 'node:path';

const types = { '.html': 'text/html; charset=utf-8', '.js': 'text/javascript', '.css': 'text/css', '.wasm': 'application/wasm' };

export function serve(root, port) {
  const server = http.createServer((request, response) => {
    const name = path.normalize(decodeURIComponent(new URL(request.url, 'http://x').pathname)).replace(/^\/+/, '') || 'index.html';
    const file = path.join(root, name);
    if (!file.startsWith(path.resolve(root)) || !fs.existsSync(file)) {
      response.writeHead(404).end();
      return;
    }
    const headers = { 'Content-Type': types[path.extname(file)] ?? 'application/octet-stream' };
    const packed = fs.existsSync(file + '.gz') && /gzip/.test(request.headers['accept-encoding'] ?? '');
    if (packed) headers['Content-Encoding'] = 'gzip';
    response.writeHead(200, headers);
    fs.createReadStream(packed ? file + '.gz' : file).pipe(response);
  });
  return new Promise((resolve) => server.listen(port, '127.0.0.1', () => resolve(server)));
}

if (process.argv[2]) {
  const server = await serve(path.resolve(process.argv[2]), Number(process.argv[3] ?? 8080));
  console.log(`http://127.0.0.1:${server.address().port}/`);
}
