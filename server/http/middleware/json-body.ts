import express, { type Request, type Response } from 'express';
import { ApiError } from '../../errors.ts';

/** Largest JSON body; files come as multipart. */
const parse = express.json({ limit: '1mb' });

/**
 * Reads the JSON body of a call; without a body it is an empty object.
 *
 * @throws ApiError wrong-media-type for a body of another kind: taken as empty, it would pass unseen
 */
export async function readJsonBody(req: Request, res: Response): Promise<unknown> {
  if (req.is('application/json') === false)
    throw new ApiError(
      'wrong-media-type',
      'Send the body as JSON, with the header Content-Type: application/json. Nothing was changed.',
    );
  await new Promise<void>((resolve, reject) => {
    parse(req, res, (error?: Error | 'route' | 'router') => {
      if (error instanceof Error) reject(error);
      else resolve();
    });
  });
  return req.body ?? {};
}
