/**
 * A design as a fragment of the page's address: "#d=1." and the base64url text of its file,
 * compressed. The form is zlib's (RFC 1950), whose checksum tells a damaged link from a sound
 * one: a changed letter must never open as another design. A fragment is not sent to any server.
 */
import { type Design, differences, type Outcome } from '../../sim-core/index.ts';
import { MOST_CHARACTERS, readDesign } from './file.ts';

/** Version of the link's form, before the dot; the design inside has a version of its own. */
const FORM = 1;
/** Longest payload that is looked at, characters; the longest valid design needs less. */
const MOST_PAYLOAD = 64 * 1024;

const refuse = (message: string): Outcome<never> => ({
  ok: false,
  problem: { place: '', message },
});

function toBase64Url(bytes: Uint8Array): string {
  let binary = '';
  for (const byte of bytes) binary += String.fromCharCode(byte);
  return btoa(binary).replaceAll('+', '-').replaceAll('/', '_').replaceAll('=', '');
}

function fromBase64Url(text: string): Uint8Array<ArrayBuffer> {
  const binary = atob(text.replaceAll('-', '+').replaceAll('_', '/'));
  return Uint8Array.from(binary, (letter) => letter.charCodeAt(0));
}

/** All that a stream yields; null as soon as it yields more than `most` bytes. */
async function readAtMost(
  stream: ReadableStream<Uint8Array<ArrayBuffer>>,
  most: number,
): Promise<Uint8Array<ArrayBuffer> | null> {
  const reader = stream.getReader();
  const parts: Uint8Array<ArrayBuffer>[] = [];
  let length = 0;
  for (;;) {
    const { done, value } = await reader.read();
    if (done) break;
    length += value.length;
    if (length > most) {
      await reader.cancel();
      return null;
    }
    parts.push(value);
  }
  return new Uint8Array(await new Blob(parts).arrayBuffer());
}

const throughPipe = (
  bytes: Uint8Array<ArrayBuffer>,
  pipe: CompressionStream | DecompressionStream,
) => new Blob([bytes]).stream().pipeThrough<Uint8Array<ArrayBuffer>>(pipe);

/** The fragment, with its "#", that opens `design`. */
export async function encodeLink(design: Design): Promise<string> {
  const bytes = new TextEncoder().encode(JSON.stringify(differences(design)));
  const packed = await readAtMost(throughPipe(bytes, new CompressionStream('deflate')), Infinity);
  return `#d=${FORM}.${toBase64Url(packed as Uint8Array)}`;
}

/**
 * The design that an untrusted link holds: a fragment, with or without its "#", or a whole
 * address. A link that is damaged, cut short, hostile, or newer than this program is refused by
 * a sentence. Reads no more than a bounded amount, however much the link would unpack to.
 */
export async function decodeLink(link: string): Promise<Outcome<Design>> {
  const fragment = link.slice(link.indexOf('#') + 1);
  const match = /^d=(\d{1,6})\.(.*)$/s.exec(fragment);
  if (match === null) return refuse('The link holds no design: it should contain “#d=1.”.');
  const [, form, payload] = match;
  if (Number(form) > FORM) {
    return refuse('The link was made by a newer version of this program; open it there.');
  }
  if (Number(form) !== FORM) return refuse('The link is damaged: it names a form that never was.');
  if (payload.length > MOST_PAYLOAD) {
    return refuse(
      `The link is ${payload.length} characters long, and at most ${MOST_PAYLOAD} are read: it is no link of this program.`,
    );
  }
  const damaged = 'The link is damaged or cut short. Copy it again, to its very end.';
  if (!/^[\w-]+$/.test(payload)) return refuse(damaged);
  let text: string;
  try {
    const unpacked = throughPipe(fromBase64Url(payload), new DecompressionStream('deflate'));
    const bytes = await readAtMost(unpacked, MOST_CHARACTERS);
    if (bytes === null) {
      return refuse('The link unpacks to far more than a design can hold, so it was not opened.');
    }
    text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    // Base64, zlib and UTF-8 each throw on damage, and none says more than that.
    return refuse(damaged);
  }
  return readDesign(text);
}
