import type { Readable } from 'node:stream';
import type { Request } from 'express';
import multer, { MulterError, type StorageEngine } from 'multer';
import type { Database } from '../db/client.ts';
import { ApiError } from '../errors.ts';
import { storeOriginal, type Receipt, type StoredOriginal } from './store-original.ts';

/** A whole request with a file, received. */
export interface ReceivedParts {
  stored: StoredOriginal;
  fileName: string;
  /** The text of the part `plan`, where there was one. */
  planPart: string | undefined;
}

const planBytes = 65_536;
/** A sender of whom nothing came for so long has stopped. */
const patienceMs = 120_000;

/**
 * Receives a multipart request whose parts `file` and `plan` come in any order, storing the file while it
 * arrives.
 *
 * @param limits the largest file that is taken, in MiB, and how long nothing may come
 * @throws ApiError with the sentence that says what was wrong with the request; nothing is being stored any
 *   more then, and the caller discards what was
 */
export async function receiveParts(
  request: Request,
  db: Database,
  receipt: Omit<Receipt, 'fileName'>,
  { limitMb, ...limits }: ReceiptLimits,
): Promise<ReceivedParts> {
  const storage = new ChunkStorage(db, receipt);
  const hasStopped = whenStopped(request, limits.patienceMs ?? patienceMs);
  void hasStopped.then((error) => {
    storage.abandon(error);
  });
  try {
    const form = readForm(request, storage, limitMb * 1_048_576, limitMb);
    // The answer does not wait for what is still to come of a file that is not taken.
    await Promise.race([form, storage.failure.then((error) => throwRefusal(error, limitMb))]);
  } catch (error) {
    await storage.settled();
    throw error;
  } finally {
    request.setTimeout(0);
  }
  const file = request.file as (Express.Multer.File & { stored: StoredOriginal }) | undefined;
  if (!file) {
    throw new ApiError('invalid-input', 'The request holds no file.', {
      errors: [
        { field: 'file', message: 'Send the export as a part named file, with a file name.' },
      ],
    });
  }
  const parts = request.body as Record<string, unknown>;
  const unknown = Object.keys(parts).filter((name) => name !== 'plan');
  if (unknown.length > 0 || Array.isArray(parts.plan)) throw refuseFields(unknown);
  return {
    stored: file.stored,
    fileName: file.originalname,
    planPart: parts.plan as string | undefined,
  };
}

export interface ReceiptLimits {
  limitMb: number;
  patienceMs?: number;
}

/** Resolves, perhaps never, when nothing of a request has come for a while. */
function whenStopped(request: Request, afterMs: number): Promise<ApiError> {
  return new Promise((resolve) => {
    request.setTimeout(afterMs, () => {
      // What may come after all is no new request.
      request.res?.setHeader('Connection', 'close');
      resolve(
        new ApiError(
          'timed-out',
          'Nothing of the file came any more. Nothing of it was kept. Send it again.',
        ),
      );
    });
  });
}

/** Reads a multipart request by multer into a storage. */
export async function readForm(
  request: Request,
  storage: StorageEngine,
  fileSize: number,
  limitMb: number,
): Promise<void> {
  if (!request.is('multipart/form-data')) {
    const sentence = 'Send the file as multipart/form-data, in a part named file.';
    throw new ApiError('wrong-media-type', sentence);
  }
  const limits = {
    fileSize,
    files: 1,
    fields: 8,
    fieldSize: planBytes,
    parts: 9,
    fieldNameSize: 100,
  };
  const middleware = multer({ storage, limits, defParamCharset: 'utf8' }).single('file');
  // Multer answers by a callback of its own; the response is not its affair.
  const error = await new Promise<unknown>((resolve) => {
    void middleware(request, request.res as never, resolve);
  });
  if (error !== undefined && error !== null) throwRefusal(error, limitMb);
}

/** Multer's storage of one request: the file goes to the database in chunks. */
class ChunkStorage implements StorageEngine {
  readonly #db: Database;
  readonly #receipt: Omit<Receipt, 'fileName'>;
  #storing: Promise<unknown> = Promise.resolve();
  #file: Readable | null = null;
  #abandoned: Error | null = null;
  #fail: (error: unknown) => void = () => undefined;
  /** Resolves with what ended the storing before its time; else never. */
  readonly failure = new Promise<unknown>((resolve) => (this.#fail = resolve));

  constructor(db: Database, receipt: Omit<Receipt, 'fileName'>) {
    this.#db = db;
    this.#receipt = receipt;
  }

  /** Stores nothing more. */
  abandon(error: Error): void {
    this.#abandoned = error;
    if (this.#file) this.#file.destroy(error);
    else this.#fail(error);
  }

  /** Waits until nothing is being stored any more: multer answers a fault before that. */
  async settled(): Promise<void> {
    await this.#storing.catch(() => undefined);
  }

  _handleFile(
    _request: Request,
    file: Express.Multer.File,
    done: (error?: unknown, info?: Partial<Express.Multer.File>) => void,
  ): void {
    // Beyond the limit the parser only drops what comes; there is no point in waiting for its end.
    file.stream.once('limit', () => file.stream.destroy(new MulterError('LIMIT_FILE_SIZE')));
    const receipt = { ...this.#receipt, fileName: cleanFileName(file.originalname) };
    const storing = storeOriginal(this.#db, receipt, file.stream);
    this.#storing = storing;
    this.#file = file.stream;
    if (this.#abandoned) file.stream.destroy(this.#abandoned);
    storing.then(
      (stored) => {
        done(null, { stored, size: stored.byteSize } as Partial<Express.Multer.File>);
      },
      (error: unknown) => {
        this.#fail(error);
        done(error);
      },
    );
  }

  /** What is stored is discarded by whoever asked for the receipt. */
  _removeFile(_request: Request, _file: unknown, done: (error: Error | null) => void): void {
    done(null);
  }
}

/** The file's name without folders and characters that cannot be shown. */
export function cleanFileName(name: string): string {
  const base = name
    .replace(/^.*[/\\]/s, '')
    .replace(/\p{C}/gu, '')
    .trim();
  return base === '' ? 'upload' : base.slice(0, 255);
}

const limitSentences: Partial<Record<MulterError['code'], string>> = {
  LIMIT_UNEXPECTED_FILE: 'Send one file, in a part named file.',
  LIMIT_FILE_COUNT: 'Send one file only.',
  LIMIT_PART_COUNT: 'The request has too many parts; it takes file and plan.',
  LIMIT_FIELD_COUNT: 'The request has too many parts; it takes file and plan.',
  LIMIT_FIELD_KEY: 'A part of the request has a name that is too long; it takes file and plan.',
  LIMIT_FIELD_VALUE: 'The column plan is longer than 64 KiB.',
};

function throwRefusal(error: unknown, limitMb: number): never {
  throw asRefusal(error, limitMb);
}

function asRefusal(error: unknown, limitMb: number): Error {
  if (error instanceof MulterError) {
    if (error.code === 'LIMIT_FILE_SIZE') {
      const sentence = `The file is larger than ${limitMb} MiB, the most that this server takes.`;
      return new ApiError('too-large', sentence);
    }
    const sentence = limitSentences[error.code] ?? 'The request was not understood as a form.';
    return new ApiError('invalid-input', sentence);
  }
  if (error instanceof Error && isBrokenForm(error)) {
    const sentence = 'The transfer broke off or is no proper form. Nothing of it was kept.';
    return new ApiError('invalid-input', sentence);
  }
  return error instanceof Error
    ? error
    : new Error('The request could not be read.', { cause: error });
}

/** What the form parser and a lost connection say; they carry no codes. */
const isBrokenForm = ({ message }: Error): boolean =>
  /^(?:Unexpected end of|Malformed|Multipart:|Request aborted|Request closed|Unsupported content type)/.test(
    message,
  );

function refuseFields(unknown: readonly string[]): ApiError {
  const issues = unknown.map((name) => ({
    field: name.slice(0, 100),
    message: 'There is no such part; the request takes file and plan.',
  }));
  const sentence =
    issues.length > 0 ? 'The request holds parts that are not known.' : 'Send one plan only.';
  return new ApiError('invalid-input', sentence, { errors: issues });
}
