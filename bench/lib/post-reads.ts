import http from 'node:http';

/** Posts a ready body to the reads door and gives the answer's text, whatever its status. */
export function postReads(options: {
  agent: http.Agent;
  port: number;
  token: string;
  body: Buffer;
}): Promise<string> {
  const { agent, port, token, body } = options;
  return new Promise<string>((resolve, reject) => {
    const headers = {
      Authorization: `Bearer ${token}`,
      'Content-Type': 'application/json',
      'Content-Length': body.length,
    };
    const address = { agent, port, host: '127.0.0.1', path: '/api/ingest/reads', headers };
    const request = http.request({ ...address, method: 'POST' }, (response) => {
      let text = '';
      response.on('data', (chunk: Buffer) => (text += chunk.toString()));
      response.on('end', () => resolve(text));
    });
    // A kept connection may be closed by the server in the moment it is used again.
    request.on('error', (error: NodeJS.ErrnoException) => {
      if (request.reusedSocket && error.code === 'ECONNRESET') resolve(postReads(options));
      else reject(error);
    });
    request.end(body);
  });
}
