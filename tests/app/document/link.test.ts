import { deflateSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test, vi } from 'vitest';
import { decodeLink, encodeLink } from '../../../app/document/link.ts';
import { defaultDesign } from '../../../sim-core/design/check.ts';
import { EXAMPLES } from '../../../sim-core/design/examples.ts';
import { anyDesign } from '../../sim-core/design/anyDesign.ts';

/** A link around any bytes, packed by Node's own zlib rather than by the code under test. */
const linkOf = (bytes: string | Uint8Array) =>
  `#d=1.${deflateSync(bytes, { level: 9 }).toString('base64url')}`;

const refusal = async (link: string) => {
  const decoded = await decodeLink(link);
  return decoded.ok ? null : decoded.problem.message;
};

describe('a link', () => {
  test('opens the design it was made of', async () => {
    await fc.assert(
      fc.asyncProperty(anyDesign, async (design) => {
        expect(await decodeLink(await encodeLink(design))).toEqual({ ok: true, value: design });
      }),
      { seed: 4, numRuns: 100 },
    );
  });

  test('may come as a fragment, without its sign, or as a whole address', async () => {
    const { design } = EXAMPLES[1];
    const link = await encodeLink(design);
    for (const form of [link, link.slice(1), `http://127.0.0.1:4173/some/page?x=1${link}`]) {
      expect(await decodeLink(form)).toEqual({ ok: true, value: design });
    }
  });

  test('holds only letters that an address passes on unchanged', async () => {
    for (const { design } of EXAMPLES) {
      const link = await encodeLink(design);
      expect(link).toMatch(/^#d=1\.[\w-]+$/);
      expect(new URL(`http://localhost/${link}`).hash).toBe(link);
    }
    expect((await encodeLink(defaultDesign())).length).toBeLessThan(60);
  });

  test('of the longest notes and 48 overrides stays within what is read', async () => {
    const notes = Array.from({ length: 4000 }, (_, k) =>
      // Lone surrogates: the costliest characters that JSON knows.
      String.fromCharCode(0xd800 + ((k * 7919) % 1024)),
    ).join('');
    const overrides = Array.from({ length: 48 }, (_, k) => ({
      section: k + 1,
      ratio: 10 + Math.sin(k),
      leakageInductance: 1e-2 + 1e-3 * Math.sin(2 * k),
      resistance: 14 + Math.sin(3 * k),
      ownCapacitance: 2e-11 + 1e-12 * Math.sin(5 * k),
      screenCapacitance: 3e-11 + 1e-12 * Math.sin(7 * k),
    }));
    const full = { ...defaultDesign(), notes, overrides };
    const design = { ...full, sections: { ...full.sections, count: 48 } };
    expect(await decodeLink(await encodeLink(design))).toEqual({ ok: true, value: design });
  });

  test('cut short at any length is refused', async () => {
    const link = await encodeLink(EXAMPLES[0].design);
    for (let length = 0; length < link.length; length++) {
      expect(await refusal(link.slice(0, length)), `${length} letters`).toMatch(/\.$/);
    }
  });

  test('with one letter changed is refused or opens the same design', async () => {
    const { design } = EXAMPLES[0];
    const link = await encodeLink(design);
    for (let place = '#d=1.'.length; place < link.length; place++) {
      const letter = link[place] === 'A' ? 'B' : 'A';
      const decoded = await decodeLink(link.slice(0, place) + letter + link.slice(place + 1));
      // The last letter has bits that belong to no byte.
      if (decoded.ok) expect(place).toBe(link.length - 1);
      if (decoded.ok) expect(decoded.value).toEqual(design);
    }
  });

  test('of random letters or bytes is refused', async () => {
    const payload = fc.oneof(
      fc.string({ maxLength: 200 }),
      fc.base64String({ maxLength: 200 }),
      fc
        .uint8Array({ minLength: 1, maxLength: 200 })
        .map((bytes) => Buffer.from(bytes).toString('base64url')),
    );
    await fc.assert(
      fc.asyncProperty(
        payload,
        fc.constantFrom('', '#', '#d=', '#d=1.', 'd=1.'),
        async (text, head) => {
          expect(await refusal(head + text)).toMatch(/\.$/);
        },
      ),
      { seed: 5, numRuns: 400 },
    );
  });

  test('that holds random text, well packed, is refused', async () => {
    await fc.assert(
      fc.asyncProperty(fc.uint8Array({ maxLength: 200 }), async (bytes) => {
        expect(await refusal(linkOf(bytes))).toMatch(/\.$/);
      }),
      { seed: 6, numRuns: 200 },
    );
  });

  test.each<[string, string, RegExp]>([
    ['nothing', '', /holds no design/],
    ['another fragment', '#section-2', /holds no design/],
    ['an empty payload', '#d=1.', /damaged/],
    ['a newer form', '#d=2.AAAA', /newer version/],
    ['a much newer form', '#d=999999.AAAA', /newer version/],
    ['a form that never was', '#d=0.AAAA', /never was/],
    ['a newer design', linkOf('{"version":2}'), /newer program/],
    ['prototype keys', linkOf('{"__proto__":{"bridge":{}}}'), /no part named “__proto__”/],
    ['a constructor', linkOf('{"bridge":{"constructor":1}}'), /no value named “constructor”/],
    ['a script', linkOf('<script>alert(1)</script>'), /not JSON/],
    ['markup in a name that is too long', linkOf(`{"name":"${'<b>'.repeat(99)}"}`), /at most 80/],
    ['bytes that are no text', linkOf(new Uint8Array([0x7b, 0xff, 0xfe])), /damaged/],
    ['deep nesting', linkOf('['.repeat(200_000)), /not JSON|list was given/],
    ['a payload beyond reading', `#d=1.${'A'.repeat(65_537)}`, /65537 characters long/],
  ])('with %s is refused by a sentence', async (_, link, words) => {
    expect(await refusal(link)).toMatch(words);
  });

  test('that unpacks to forty megabytes is refused after less than one', async () => {
    const bomb = linkOf(Buffer.alloc(40e6, 0x20));
    expect(bomb.length).toBeLessThan(65_536);
    let unpacked = 0;
    const Inflate = DecompressionStream;
    class CountingInflate {
      readonly writable: WritableStream;
      readonly readable: ReadableStream;
      constructor(format: CompressionFormat) {
        const inner = new Inflate(format);
        const count = new TransformStream<Uint8Array, Uint8Array>({
          transform(chunk, controller) {
            unpacked += chunk.length;
            controller.enqueue(chunk);
          },
        });
        this.writable = inner.writable;
        this.readable = inner.readable.pipeThrough(count);
      }
    }
    vi.stubGlobal('DecompressionStream', CountingInflate);
    try {
      expect(await refusal(bomb)).toMatch(/far more than a design/);
    } finally {
      vi.unstubAllGlobals();
    }
    expect(unpacked).toBeGreaterThan(256 * 1024);
    expect(unpacked).toBeLessThan(1e6);
  });
});
