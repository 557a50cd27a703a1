import { UndirectedGraph } from 'graphology';
import { dijkstra } from 'graphology-shortest-path';
import { describe, expect, test } from 'vitest';
import {
  RouteGraph,
  type RouteEdge,
  type RouteNode,
} from '../../server/domain/routes/route-graph.js';
import { SeededRandom } from '../support/seeded-random.js';

interface Drawn {
  nodes: RouteNode[];
  edges: RouteEdge[];
}

/** A random graph, now and then in pieces; at most one edge a pair, odd nodes are junctions. */
function draw(seed: number): Drawn {
  const random = new SeededRandom(seed);
  const count = random.whole(3, 14);
  const nodes = Array.from({ length: count }, (_, index) => ({
    id: 100 + index,
    siteId: index % 2 ? null : index,
  }));
  const edges: RouteEdge[] = [];
  const density = random.between(0.1, 0.6);
  for (let a = 0; a < count; a += 1) {
    for (let b = a + 1; b < count; b += 1) {
      if (!random.chance(density)) continue;
      const metres = random.whole(500, 90_000);
      edges.push({
        from: 100 + a,
        to: 100 + b,
        metres,
        kind: random.chance(0.2) ? 'water' : 'rail',
      });
    }
  }
  return { nodes, edges };
}

// Dijkstra 1959, against graphology-shortest-path as another's implementation of it.
function reference({ nodes, edges }: Drawn, from: number, to: number, without?: RouteEdge) {
  const graph = new UndirectedGraph<object, { metres: number; rail: number }>();
  for (const node of nodes) graph.addNode(node.id);
  for (const edge of edges) {
    if (edge === without) continue;
    const rail = edge.kind === 'rail' ? edge.metres : 0;
    graph.addEdge(edge.from, edge.to, { metres: edge.metres, rail });
  }
  const path = dijkstra.bidirectional(graph, String(from), String(to), 'metres');
  if (!path) return null;
  const links = path.slice(1).map((node, index) => graph.edge(path[index], node) as string);
  const sum = (key: 'metres' | 'rail') =>
    links.reduce((total, link) => total + graph.getEdgeAttribute(link, key), 0);
  const ends = links.map((link) => graph.extremities(link));
  return { metres: sum('metres'), rail: sum('rail'), ends };
}

describe('shortest ways', () => {
  test('agree with graphology-shortest-path on 150 random graphs', () => {
    let joined = 0;
    let apart = 0;
    for (let seed = 1; seed <= 150; seed += 1) {
      const drawn = draw(seed);
      const graph = new RouteGraph(drawn.nodes, drawn.edges);
      const sites = drawn.nodes.filter(({ siteId }) => siteId !== null);
      for (const a of sites) {
        for (const b of sites) {
          if (a === b) continue;
          const expected = reference(drawn, a.id, b.id);
          const way = graph.between(a.siteId as number, b.siteId as number);
          expect(way?.railMetres ?? null, `seed ${seed}`).toBe(expected?.rail ?? null);
          if (expected) joined += 1;
          else apart += 1;
        }
      }
    }
    expect(joined).toBeGreaterThan(1000);
    expect(apart).toBeGreaterThan(100);
  });

  test('are a guess exactly where a way without one of their edges is at most a tenth longer', () => {
    const told = { true: 0, false: 0 };
    for (let seed = 200; seed < 500; seed += 1) {
      const drawn = draw(seed);
      const graph = new RouteGraph(drawn.nodes, drawn.edges);
      const [a, b] = [drawn.nodes[0], drawn.nodes[2]] as [RouteNode, RouteNode];
      const best = reference(drawn, a.id, b.id);
      if (!best) continue;
      const others = best.ends.map(([one, two]) => {
        const cut = drawn.edges.find(
          ({ from, to }) =>
            (String(from) === one && String(to) === two) ||
            (String(from) === two && String(to) === one),
        );
        return reference(drawn, a.id, b.id, cut)?.metres ?? Infinity;
      });
      const estimated = Math.min(...others) <= best.metres * 1.1;
      expect(graph.between(a.siteId as number, b.siteId as number)?.estimated).toBe(estimated);
      told[`${estimated}`] += 1;
    }
    expect(told.true).toBeGreaterThan(5);
    expect(told.false).toBeGreaterThan(20);
  });

  test('are the same both ways, and nothing from a site to itself', () => {
    const { nodes, edges } = draw(7);
    const graph = new RouteGraph(nodes, edges);
    expect(graph.between(0, 2)).toEqual(graph.between(2, 0));
    expect(graph.between(2, 2)).toEqual({ railMetres: 0, estimated: false });
  });

  test('a site off the graph is joined to nothing', () => {
    const graph = new RouteGraph([{ id: 1, siteId: 1 }], []);
    expect(graph.between(1, 2)).toBeNull();
  });

  test('two tracks of one length between the same nodes are a guess', () => {
    const nodes = [1, 2].map((id) => ({ id, siteId: id }));
    const edge = { from: 1, to: 2, metres: 5000, kind: 'rail' } as const;
    expect(new RouteGraph(nodes, [edge, { ...edge }]).between(1, 2)).toEqual({
      railMetres: 5000,
      estimated: true,
    });
  });
});
