/** A browser's cookies, as far as tests of the session need them. */
export interface CookieJar {
  post(path: string, body?: unknown, headers?: Record<string, string>): Promise<Response>;
  /** The cookies as sent, such as `a=1; b=2`. */
  read(): string;
  write(cookies: string): void;
  clear(): void;
}

export function cookieJar(url: string): CookieJar {
  const cookies = new Map<string, string>();

  function keep(response: Response): void {
    for (const line of response.headers.getSetCookie()) {
      const [pair = ''] = line.split(';');
      const [name = '', value = ''] = pair.split('=');
      if (/Expires=Thu, 01 Jan 1970/i.test(line)) cookies.delete(name);
      else cookies.set(name, value);
    }
  }

  const read = () => [...cookies].map(([name, value]) => `${name}=${value}`).join('; ');

  return {
    async post(path, body, headers = {}) {
      const response = await fetch(url + path, {
        method: 'POST',
        headers: { ...(body === undefined ? {} : { 'content-type': 'application/json' }), cookie: read(), ...headers },
        ...(body === undefined ? {} : { body: JSON.stringify(body) }),
      });
      keep(response);
      return response;
    },
    read,
    write(text) {
      cookies.clear();
      for (const pair of text.split('; ')) {
        const [name = '', value = ''] = pair.split('=');
        cookies.set(name, value);
      }
    },
    clear: () => cookies.clear(),
  };
}
