import { createReadStream } from 'node:fs';
import { basename } from 'node:path';
import { Readable } from 'node:stream';
import { createGunzip } from 'node:zlib';
import { LogError } from './error.ts';

/** A log's text in pieces, whatever it was packed and encoded in. */
export interface TextSource {
  readonly name: string;
  readonly pieces: AsyncIterable<string>;
}

/** Text of a file. Errors surface while it is read. */
export function fileText(path: string): TextSource {
  const name = basename(path);
  return { name, pieces: decoded(createReadStream(path, { highWaterMark: 1 << 18 }), name) };
}

/** Text of bytes at hand: standard input, or what an outside plant printed. */
export function bytesText(bytes: Uint8Array, name: string): TextSource {
  return {
    name,
    pieces: decoded(Readable.from([Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength)]), name),
  };
}

async function* decoded(raw: Readable, name: string): AsyncIterable<string> {
  try {
    yield* decodedBytes(unpacked(raw), name);
  } catch (error) {
    throw asLogError(error, name);
  }
}

/** Unpacks gzip, known by its first two bytes (RFC 1952). */
async function* unpacked(raw: Readable): AsyncIterable<Buffer> {
  const iterator = raw[Symbol.asyncIterator]();
  const first = await iterator.next();
  if (first.done) return;
  const head: Buffer = first.value;
  const rest = async function* () {
    yield head;
    for (let next = await iterator.next(); !next.done; next = await iterator.next()) yield next.value;
  };
  const packed = head.length > 1 && head[0] === 0x1f && head[1] === 0x8b;
  if (!packed) {
    yield* rest();
    return;
  }
  const gunzip = createGunzip();
  const source = Readable.from(rest());
  source.on('error', (error) => gunzip.destroy(error));
  yield* source.pipe(gunzip);
}

async function* decodedBytes(chunks: AsyncIterable<Buffer>, name: string): AsyncIterable<string> {
  let decoder: InstanceType<typeof TextDecoder> | null = null;
  for await (const chunk of chunks) {
    if (decoder === null) decoder = new TextDecoder(encodingOf(chunk));
    const text = decoder.decode(chunk, { stream: true });
    if (text.includes('\0')) {
      throw new LogError('binary', 'this is not text: it holds null bytes.', 'Export the log as CSV or JSON Lines.', {
        file: name,
      });
    }
    yield text;
  }
  const tail = decoder?.decode();
  if (tail) yield tail;
}

/** UTF-16 by its byte-order mark, else UTF-8, whose mark the decoder takes off. */
function encodingOf(head: Buffer): string {
  if (head[0] === 0xff && head[1] === 0xfe) return 'utf-16le';
  if (head[0] === 0xfe && head[1] === 0xff) return 'utf-16be';
  return 'utf-8';
}

function asLogError(error: unknown, name: string): unknown {
  if (error instanceof LogError || !(error instanceof Error)) return error;
  const code = 'code' in error && typeof error.code === 'string' ? error.code : '';
  const at = { file: name };
  if (code === 'ENOENT') return new LogError('cannot-open', 'there is no such file.', 'Check the path.', at);
  if (code === 'EISDIR') return new LogError('cannot-open', 'this is a folder.', 'Name a file in it.', at);
  if (code === 'EACCES' || code === 'EPERM')
    return new LogError('cannot-open', 'it may not be read.', 'Check its permissions.', at);
  if (code === 'Z_BUF_ERROR' || code === 'Z_DATA_ERROR') {
    return new LogError('truncated', 'its gzip packing is damaged or cut off.', 'Copy the file again, whole.', at);
  }
  return error;
}
