import { request } from 'node:http';
import { demoPassword } from '../../server/demo/accounts.ts';
import type { Upload } from '../../shared/contracts/uploads.ts';

/** The demo's analyst at a server that runs as a process of its own, through its API. */
export class Analyst {
  readonly #origin: string;
  readonly #cookie: string;

  private constructor(origin: string, cookie: string) {
    this.#origin = origin;
    this.#cookie = cookie;
  }

  /** Signs in. @throws Error where the server does not let them */
  static async at(origin: string): Promise<Analyst> {
    const response = await fetch(`${origin}/api/auth/sign-in`, {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({ email: 'analyst@lowmoor.example', password: demoPassword }),
    });
    if (!response.ok) throw new Error(`Signing in was answered ${response.status}.`);
    return new Analyst(origin, response.headers.get('set-cookie')?.split(';')[0] ?? '');
  }

  /** @throws Error where it is not answered well */
  async call<Body>(path: string, init: RequestInit = {}): Promise<Body> {
    const response = await fetch(this.#origin + path, {
      ...init,
      headers: { ...init.headers, Cookie: this.#cookie },
    });
    const text = await response.text();
    if (!response.ok) throw new Error(`${path} answered ${response.status}: ${text}`);
    return JSON.parse(text) as Body;
  }

  async makeSite(name: string): Promise<number> {
    const { id } = await this.call<{ id: number }>('/api/sites', {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({ name, timeZone: 'Europe/Dublin' }),
    });
    return id;
  }

  /** Hands a file over. @returns the upload's id */
  async send(siteId: number, file: Blob): Promise<number> {
    const form = new FormData();
    form.set('file', file, 'log.csv');
    const path = `/api/sites/${siteId}/uploads`;
    return (await this.call<{ id: number }>(path, { method: 'POST', body: form })).id;
  }

  /** Sends the beginning of a file, and no more. @returns what breaks the transfer off */
  sendInPart(siteId: number, beginning: Buffer): () => void {
    const sending = request(`${this.#origin}/api/sites/${siteId}/uploads`, {
      method: 'POST',
      headers: { 'Content-Type': 'multipart/form-data; boundary=b', Cookie: this.#cookie },
    });
    // It ends with the server.
    sending.on('error', () => undefined);
    sending.write('--b\r\nContent-Disposition: form-data; name="file"; filename="log.csv"\r\n\r\n');
    sending.write(beginning);
    return () => sending.destroy();
  }

  /** Waits until an upload has one of these statuses. */
  async until(
    siteId: number,
    uploadId: number,
    statuses: readonly Upload['status'][],
  ): Promise<Upload> {
    for (;;) {
      const seen = await this.call<Upload>(`/api/sites/${siteId}/uploads/${uploadId}`);
      if (statuses.includes(seen.status)) return seen;
      // Watching is to cost little beside what is watched.
      await new Promise((resolve) => setTimeout(resolve, 20));
    }
  }
}
