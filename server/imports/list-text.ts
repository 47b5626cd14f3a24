/**
 * Turns the bytes of a list into pieces of text, short enough to be worked on without holding other requests up. Counts the bytes, and
 * refuses what is not text in the encoding that it says: guessing would turn names into nonsense that nobody notices.
 */
import { ListRefused } from './list-refused.ts';

/** what a client may state as charset, with the name by which TextDecoder knows it */
const ENCODINGS: { readonly [charset: string]: string } = {
  'utf-8': 'utf-8',
  utf8: 'utf-8',
  'us-ascii': 'utf-8',
  'utf-16le': 'utf-16le',
  'windows-1252': 'windows-1252',
  'iso-8859-1': 'windows-1252',
};

/** bytes worked on in one go: some hundred rows */
const PIECE = 16 * 1024;

export async function* listText(bytes: AsyncIterable<Uint8Array>, charset: string | undefined, mostBytes: number): AsyncGenerator<string> {
  const stated = charset === undefined ? 'utf-8' : ENCODINGS[charset.toLowerCase()];
  if (stated === undefined) {
    throw new ListRefused('unsupported-media-type', `The charset ${charset} is not read: send utf-8, utf-16le or windows-1252.`);
  }
  let decoder: InstanceType<typeof TextDecoder> | undefined;
  let arrived = 0;
  for await (const chunk of bytes) {
    arrived += chunk.byteLength;
    if (arrived > mostBytes) throw new ListRefused('list-too-large', `The list is longer than ${mostBytes} bytes. Send it in parts.`);
    // Windows writes "Unicode text" as UTF-16 with this mark and no charset.
    decoder ??= new TextDecoder(startsAsUtf16(chunk) ? 'utf-16le' : stated, { fatal: true });
    for (let from = 0; from < chunk.byteLength; from += PIECE) yield decode(decoder, chunk.subarray(from, from + PIECE), stated);
  }
  if (decoder !== undefined) yield decode(decoder, undefined, stated);
}

function startsAsUtf16(chunk: Uint8Array): boolean {
  return chunk[0] === 0xff && chunk[1] === 0xfe;
}

/** The decoder takes a byte-order mark away by itself. */
function decode(decoder: InstanceType<typeof TextDecoder>, piece: Uint8Array | undefined, stated: string): string {
  try {
    return piece === undefined ? decoder.decode() : decoder.decode(piece, { stream: true });
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    const hint =
      stated === 'utf-8' ? ' Save it as UTF-8, or send `charset=windows-1252` with the type where a spreadsheet wrote it so.' : '';
    throw new ListRefused('unreadable-list', `The list is not text in ${decoder.encoding}.${hint}`);
  }
}
