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

/**
 * Receives a multipart request whose parts `file` and `plan` come in any order, storing the file while it
 * arrives.
 *
 * @param limitMb the largest file that is taken, in MiB
 * @throws ApiError with the sentence that says what was wrong with the request; nothing is being stored any
 *   more then, and the caller discards what was
 */
export async function receiveParts(
  request: Request,
  db: Database,
  receipt: Omit<Receipt, 'fileName'>,
  limitMb: number,
): Promise<ReceivedParts> {
  const storage = new ChunkStorage(db, receipt);
  try {
    await runMulter(request, storage, limitMb * 1_048_576, limitMb);
  } catch (error) {
    await storage.settled();
    throw error;
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

/** Reads a multipart request by multer into a storage. */
export async function runMulter(
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
  if (error !== undefined && error !== null) throw asRefusal(error, limitMb);
}

/** Multer's storage of one request: the file goes to the database in chunks. */
class ChunkStorage implements StorageEngine {
  readonly #db: Database;
  readonly #receipt: Omit<Receipt, 'fileName'>;
  #storing: Promise<unknown> = Promise.resolve();

  constructor(db: Database, receipt: Omit<Receipt, 'fileName'>) {
    this.#db = db;
    this.#receipt = receipt;
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
    storing.then(
      (stored) => {
        done(null, { stored, size: stored.byteSize } as Partial<Express.Multer.File>);
      },
      (error: unknown) => {
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
