import type { Express } from 'express';
import { isGuard } from '../../server/middleware/guard.js';

/** One route as the router has it. */
export interface WalkedRoute {
  method: string;
  path: string;
  isGuarded: boolean;
}

interface Layer {
  handle: object & { stack?: Layer[] };
  name: string;
  match(path: string): boolean;
  route?: { path: string | string[]; stack: { method?: string; handle: object }[] };
}

/**
 * Every route of an app. A layer does not tell where it is mounted, only which paths it takes;
 * ours are mounted at the root or at /api.
 */
export function walkRoutes(app: Express): WalkedRoute[] {
  return walk((app.router as unknown as { stack: Layer[] }).stack, '');
}

function walk(layers: Layer[], prefix: string): WalkedRoute[] {
  return layers.flatMap((layer) => {
    if (layer.route) return routesOf(layer.route, prefix);
    if (!layer.handle.stack) return [];
    return walk(layer.handle.stack, `${prefix}${mountOf(layer)}`);
  });
}

function mountOf(layer: Layer): string {
  if (layer.match('/anything')) return '';
  if (layer.match('/api/anything')) return '/api';
  throw new Error(`A router is mounted where this walk does not look: ${layer.name}`);
}

function routesOf(route: NonNullable<Layer['route']>, prefix: string): WalkedRoute[] {
  const methods = new Set(route.stack.map(({ method }) => method ?? 'all'));
  return [route.path].flat().flatMap((path) =>
    [...methods].map((method) => {
      const handlers = route.stack.filter((layer) => (layer.method ?? 'all') === method);
      const isGuarded = handlers.some(({ handle }) => isGuard(handle));
      return { method, path: `${prefix}${path}`, isGuarded };
    }),
  );
}
