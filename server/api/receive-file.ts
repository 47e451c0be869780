import type { Request, Response } from 'express';
import multer from 'multer';
import { BadInputError } from '../errors.ts';

/**
 * The file in a field of a multipart request, in memory.
 * @throws {BadInputError} at the field when there is none, it is too large, or the request is broken.
 */
export async function receiveFile(request: Request, response: Response, field: string, maxBytes: number): Promise<Buffer> {
  const receive = multer({
    storage: multer.memoryStorage(),
    limits: { fileSize: maxBytes, files: 1, fields: 8, parts: 9, fieldSize: 1024 },
  }).single(field);
  await new Promise<void>((resolve, reject) => {
    receive(request, response, (error: unknown) => {
      if (error === undefined || error === null) return resolve();
      // Kept in memory, nothing of ours can fail here: it is the request that is too large or broken.
      const isTooLarge = error instanceof multer.MulterError && error.code === 'LIMIT_FILE_SIZE';
      const message = isTooLarge
        ? `The file is larger than ${maxBytes / 2 ** 20} MB`
        : 'The upload is broken; send one file as multipart/form-data';
      reject(new BadInputError([{ path: field, message }]));
    });
  });
  if (request.file === undefined) throw new BadInputError([{ path: field, message: `Send a file in the multipart field \`${field}\`` }]);
  return request.file.buffer;
}
