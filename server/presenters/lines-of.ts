/** Codes of the nodes next on the open line, on either side of a read point. */
export interface Lines {
  decreasing: string[];
  increasing: string[];
}

/** The lines of a read point from the JSON that its row keeps. */
export function linesOf(json: string): Lines {
  const { decreasing = [], increasing = [] } = JSON.parse(json) as Partial<Lines>;
  return { decreasing, increasing };
}
