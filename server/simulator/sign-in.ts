/** Signs a demo person in as a browser would, and gives the headers that say who it is. */
export async function signIn(
  address: string,
  person: { email: string; password: string },
): Promise<Record<string, string>> {
  const response = await fetch(`${address}/api/session`, {
    method: 'POST',
    headers: { 'content-type': 'application/json' },
    body: JSON.stringify(person),
  });
  await response.arrayBuffer();
  const cookie = response.headers.getSetCookie().map((line) => line.split(';')[0]);
  if (!response.ok || cookie.length === 0) {
    throw new Error(`Sign-in of ${person.email} was answered ${response.status}.`);
  }
  return { cookie: cookie.join('; ') };
}
