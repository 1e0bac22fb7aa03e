import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { openAsBlob, readFileSync, writeFileSync } from 'node:fs';
import { createInterface } from 'node:readline';
import { demoPassword } from '../../server/demo/accounts.ts';
import type { Upload } from '../../shared/contracts/uploads.ts';

/** The server as it is started for people, in a process of its own, used through its API. */
export class BenchServer {
  readonly #process: ChildProcess;
  readonly origin: string;
  #cookie = '';

  private constructor(process: ChildProcess, origin: string) {
    this.#process = process;
    this.origin = origin;
  }

  static async start(databaseUrl: string): Promise<BenchServer> {
    const process_ = spawn(
      process.execPath,
      ['--max-semi-space-size=4', '--optimize-for-size', '--import', 'tsx', 'server/main.ts'],
      {
        env: {
          ...process.env,
          DATABASE_URL: databaseUrl,
          PORT: '0',
          WEIRMARK_DEMO: 'empty',
          LOG_LEVEL: 'warn',
          WEIRMARK_UPLOAD_LIMIT_MB: '8192',
        },
        stdio: ['ignore', 'pipe', 'inherit'],
      },
    );
    for await (const line of createInterface({ input: process_.stdout })) {
      const origin = /ready at (\S+)/.exec(line)?.[1];
      if (origin === undefined) continue;
      const server = new BenchServer(process_, origin);
      await server.signIn();
      return server;
    }
    throw new Error('The server did not start.');
  }

  async stop(): Promise<void> {
    this.#process.kill('SIGTERM');
    await once(this.#process, 'exit');
  }

  /** Most memory that the server has held so far, in MB. */
  peakMegabytes(): number {
    const status = readFileSync(`/proc/${this.#process.pid ?? 0}/status`, 'utf8');
    return Number(/VmHWM:\s+(\d+) kB/.exec(status)?.[1]) / 1024;
  }

  /** Forgets what was held before: the server holds most while it starts. (proc(5), clear_refs.) */
  forgetPeak(): void {
    writeFileSync(`/proc/${this.#process.pid ?? 0}/clear_refs`, '5');
  }

  private async signIn(): Promise<void> {
    const response = await fetch(`${this.origin}/api/auth/sign-in`, {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({ email: 'analyst@lowmoor.example', password: demoPassword }),
    });
    this.#cookie = response.headers.get('set-cookie')?.split(';')[0] ?? '';
  }

  async call<Body>(path: string, init: RequestInit = {}): Promise<Body> {
    const response = await fetch(this.origin + path, {
      ...init,
      headers: { ...init.headers, Cookie: this.#cookie },
    });
    const text = await response.text();
    if (!response.ok) throw new Error(`${path} answered ${response.status}: ${text}`);
    return (text === '' ? undefined : JSON.parse(text)) as Body;
  }

  async makeSite(name: string): Promise<number> {
    const site = await this.call<{ id: number }>('/api/sites', {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({ name, timeZone: 'Europe/Dublin' }),
    });
    return site.id;
  }

  /** Uploads a file. Reading: until it is staged; whole: from the answer to the call to visible figures. */
  async upload(siteId: number, file: string) {
    const form = new FormData();
    form.set('file', await openAsBlob(file), 'log.csv');
    const { id } = await this.call<{ id: number }>(`/api/sites/${siteId}/uploads`, {
      method: 'POST',
      body: form,
    });
    const began = performance.now();
    let read: number | null = null;
    const upload = await this.until(siteId, id, (seen) => {
      if (seen.status === 'loading' || seen.status === 'loaded') read ??= performance.now();
      return seen.status === 'loaded' || seen.status === 'failed';
    });
    if (upload.status !== 'loaded') throw new Error(upload.errorDetail ?? 'The upload failed.');
    const ended = performance.now();
    return { id, readSeconds: ((read ?? ended) - began) / 1000, seconds: (ended - began) / 1000 };
  }

  async withdraw(siteId: number, uploadId: number): Promise<number> {
    const began = performance.now();
    await this.call(`/api/sites/${siteId}/uploads/${uploadId}`, { method: 'DELETE' });
    await this.until(siteId, uploadId, (seen) => seen.status === 'withdrawn');
    return (performance.now() - began) / 1000;
  }

  private async until(
    siteId: number,
    uploadId: number,
    ended: (upload: Upload) => boolean,
  ): Promise<Upload> {
    for (;;) {
      const upload = await this.call<Upload>(`/api/sites/${siteId}/uploads/${uploadId}`);
      if (ended(upload)) return upload;
      // Watching is to cost nothing beside what is watched.
      await new Promise((resolve) => setTimeout(resolve, 50));
    }
  }
}
