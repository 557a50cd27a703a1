import path from 'node:path';
import { unplacedRooms, whyNot } from './rooms.mjs';

const reported = new Set();

/** Lint rule: a room imports only rooms below it. The order stands in rooms.mjs. */
export const importDirection = {
  meta: {
    type: 'problem',
    docs: { description: 'a room imports only rooms below it' },
    schema: [],
    messages: {
      wrongWay: '{{ why }}',
      unplaced:
        '{{ room }} has no place among the rooms: give it one in scripts/lint/rooms.mjs, with a decision record.',
    },
  },
  create(context) {
    const root = context.cwd;
    const from = slashes(path.relative(root, context.filename));
    const check = (node, source) => {
      if (typeof source !== 'string' || !source.startsWith('.')) return;
      const target = path.resolve(path.dirname(context.filename), source);
      const why = whyNot(from, slashes(path.relative(root, target)));
      if (why) context.report({ node, messageId: 'wrongWay', data: { why } });
    };
    return {
      Program(node) {
        for (const room of unplacedRooms(root)) {
          if (reported.has(room) || !from.startsWith(room)) continue;
          reported.add(room);
          context.report({ node, messageId: 'unplaced', data: { room } });
        }
      },
      ImportDeclaration: (node) => check(node, node.source.value),
      ExportNamedDeclaration: (node) => check(node, node.source?.value),
      ExportAllDeclaration: (node) => check(node, node.source.value),
      ImportExpression: (node) => check(node, node.source.value),
    };
  },
};

function slashes(file) {
  return file.split(path.sep).join('/');
}
