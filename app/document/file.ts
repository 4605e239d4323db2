/** A design as the text of a file: JSON that holds what differs from the defaults. */
import { checkDesign, type Design, differences, type Outcome } from '../../sim-core/index.ts';

/** Longest text that is read as a design, characters; the longest that is written is far less. */
export const MOST_CHARACTERS = 256 * 1024;

/** The text of a design's file. */
export function writeDesign(design: Design): string {
  return `${JSON.stringify(differences(design), null, 2)}\n`;
}

/** The design in untrusted text, or the sentence that refuses it. Never throws. */
export function readDesign(text: string): Outcome<Design> {
  if (text.length > MOST_CHARACTERS) {
    const message = `The design is ${text.length} characters long, and at most ${MOST_CHARACTERS} are read: it is no design of this program.`;
    return { ok: false, problem: { place: '', message } };
  }
  let data: unknown;
  try {
    data = JSON.parse(text);
  } catch (error) {
    // The engine's own words tell the place of the fault; they may quote the text at length.
    const detail = error instanceof Error ? error.message.slice(0, 120) : '';
    const message = `The text is not JSON, so it holds no design (${detail}).`;
    return { ok: false, problem: { place: '', message } };
  }
  return checkDesign(data);
}
