/** A junction or site of the route graph; `siteId` is null at a junction. */
export interface RouteNode {
  id: number;
  siteId: number | null;
}

/** Track (or water) between two nodes, usable both ways; `metres` along it. */
export interface RouteEdge {
  from: number;
  to: number;
  metres: number;
  kind: 'rail' | 'water';
}

/** The shortest way between two sites. */
export interface Route {
  /** Metres of it on rails; water counts time, not miles. */
  railMetres: number;
  /** A second way is at most 10 % longer, so which one was taken is a guess. */
  estimated: boolean;
}

interface Step {
  edge: RouteEdge;
  to: number;
}

interface Path {
  metres: number;
  edges: RouteEdge[];
}

const SAME_LENGTH = 1.1;

/** Shortest ways over the route graph (Dijkstra 1959), remembered per pair of sites. */
export class RouteGraph {
  private readonly steps = new Map<number, Step[]>();
  private readonly nodeOfSite = new Map<number, number>();
  private readonly known = new Map<string, Route | null>();

  constructor(nodes: readonly RouteNode[], edges: readonly RouteEdge[]) {
    for (const node of nodes) {
      if (node.siteId !== null) this.nodeOfSite.set(node.siteId, node.id);
    }
    for (const edge of edges) {
      this.addStep(edge.from, { edge, to: edge.to });
      this.addStep(edge.to, { edge, to: edge.from });
    }
  }

  /** The way between two sites; null when one is off the graph or nothing joins them. */
  between(siteA: number, siteB: number): Route | null {
    if (siteA === siteB) return { railMetres: 0, estimated: false };
    const key = siteA < siteB ? `${siteA} ${siteB}` : `${siteB} ${siteA}`;
    let route = this.known.get(key);
    if (route === undefined) {
      route = this.find(Math.min(siteA, siteB), Math.max(siteA, siteB));
      this.known.set(key, route);
    }
    return route;
  }

  /** The node of a site; undefined when it is off the graph. */
  nodeOf(siteId: number): number | undefined {
    return this.nodeOfSite.get(siteId);
  }

  /** Metres of the shortest way between two nodes without the edges that join an `a` and a `b`. */
  metresAvoiding(
    from: number,
    to: number,
    { a, b }: { a: readonly number[]; b: readonly number[] },
  ): number | null {
    const isCut = (edge: RouteEdge) =>
      (a.includes(edge.from) && b.includes(edge.to)) ||
      (a.includes(edge.to) && b.includes(edge.from));
    return this.shortest(from, to, isCut)?.metres ?? null;
  }

  private addStep(node: number, step: Step): void {
    const steps = this.steps.get(node);
    if (steps) steps.push(step);
    else this.steps.set(node, [step]);
  }

  private find(siteA: number, siteB: number): Route | null {
    const from = this.nodeOfSite.get(siteA);
    const to = this.nodeOfSite.get(siteB);
    if (from === undefined || to === undefined) return null;
    const best = this.shortest(from, to, () => false);
    if (!best) return null;
    const railMetres = best.edges.reduce((sum, e) => sum + (e.kind === 'rail' ? e.metres : 0), 0);
    const estimated = best.edges.some((edge) => {
      const other = this.shortest(from, to, (one) => one === edge);
      return other !== null && other.metres <= best.metres * SAME_LENGTH;
    });
    return { railMetres, estimated };
  }

  private shortest(from: number, to: number, isCut: (edge: RouteEdge) => boolean): Path | null {
    const best = new Map<number, Path>([[from, { metres: 0, edges: [] }]]);
    const open = new Set([from]);
    for (;;) {
      const node = nearest(open, best);
      if (node === null) return null;
      const path = best.get(node) as Path;
      if (node === to) return path;
      open.delete(node);
      for (const { edge, to: next } of this.steps.get(node) ?? []) {
        if (isCut(edge)) continue;
        const metres = path.metres + edge.metres;
        if (metres < (best.get(next)?.metres ?? Infinity)) {
          best.set(next, { metres, edges: [...path.edges, edge] });
          open.add(next);
        }
      }
    }
  }
}

function nearest(open: Set<number>, best: Map<number, Path>): number | null {
  let found: number | null = null;
  let least = Infinity;
  for (const node of open) {
    const metres = (best.get(node) as Path).metres;
    if (metres < least) [found, least] = [node, metres];
  }
  return found;
}
