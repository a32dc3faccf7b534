/** A small browser without a screen: keeps cookies, speaks JSON, tells status and body. */

export interface Answer<T = unknown> {
  status: number;
  body: T;
  headers: Headers;
}

export class HttpClient {
  private readonly cookies = new Map<string, string>();

  constructor(private readonly baseUrl: string) {}

  get cookie(): string {
    return [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  }

  async raw(method: string, path: string, init: { body?: string | Uint8Array<ArrayBuffer>; headers?: Record<string, string> } = {}): Promise<Response> {
    const response = await fetch(`${this.baseUrl}${path}`, {
      method,
      redirect: 'manual',
      headers: { ...(this.cookies.size > 0 ? { cookie: this.cookie } : {}), origin: this.baseUrl, ...init.headers },
      ...(init.body === undefined ? {} : { body: init.body }),
    });
    for (const line of response.headers.getSetCookie()) {
      const [pair = ''] = line.split(';');
      const cut = pair.indexOf('=');
      if (/max-age=0/i.test(line)) this.cookies.delete(pair.slice(0, cut));
      else this.cookies.set(pair.slice(0, cut), pair.slice(cut + 1));
    }
    return response;
  }

  async send<T = Record<string, unknown>>(method: string, path: string, body?: unknown): Promise<Answer<T>> {
    const response = await this.raw(method, path, body === undefined ? {} : { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } });
    const text = await response.text();
    const isJson = response.headers.get('content-type')?.includes('json') ?? false;
    return { status: response.status, body: (isJson ? JSON.parse(text) : text) as T, headers: response.headers };
  }

  get = <T = Record<string, unknown>>(path: string) => this.send<T>('GET', path);
  post = <T = Record<string, unknown>>(path: string, body?: unknown) => this.send<T>('POST', path, body);
  put = <T = Record<string, unknown>>(path: string, body?: unknown) => this.send<T>('PUT', path, body);
  patch = <T = Record<string, unknown>>(path: string, body?: unknown) => this.send<T>('PATCH', path, body);
  delete = <T = Record<string, unknown>>(path: string, body?: unknown) => this.send<T>('DELETE', path, body);

  signIn(email: string, password: string): Promise<Answer<Record<string, unknown>>> {
    return this.post('/api/auth/sign-in/email', { email, password });
  }
}
