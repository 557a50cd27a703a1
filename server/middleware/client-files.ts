import { existsSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import express, { Router } from 'express';

/** Where the build puts the client, seen from the built server and from its sources. */
const builds = ['../client', '../../client', '../../dist/client'];

/** The directory of the built client, or null when there is no build. */
export function findClientDirectory(): string | null {
  const found = builds
    .map((place) => fileURLToPath(new URL(place, import.meta.url)))
    .find((directory) => existsSync(path.join(directory, 'index.html')));
  return found ?? null;
}

/** The client's files, and its one page for every address of a screen. */
export function clientFiles(directory: string): Router {
  const router = Router();
  router.use(
    '/assets',
    express.static(path.join(directory, 'assets'), {
      immutable: true,
      maxAge: '1y',
      fallthrough: false,
      index: false,
    }),
  );
  router.use(express.static(directory, { index: false }));
  router.get('/{*screen}', (request, response, next) => {
    if (/^\/(api|metrics)(\/|$)/.test(request.path)) return next();
    response.set('Cache-Control', 'no-cache').sendFile('index.html', { root: directory });
  });
  return router;
}
