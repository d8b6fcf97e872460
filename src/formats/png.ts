import { type DecodedPng, decode, encode } from 'fast-png';

/** PNG files (W3C, Portable Network Graphics, third edition) with physical pixel size and caption. */

export interface PngPicture {
  readonly width: number;
  readonly height: number;
  /** Red, green, blue, alpha 0..255, row after row from the top. */
  readonly data: Uint8Array | Uint8ClampedArray;
}

export interface PngNotes {
  /** Edge of a pixel (m), written as whole pixels per metre. */
  readonly pixel?: number;
  /** Keyword (1 to 79 Latin-1 characters) and text, one chunk each. */
  readonly text?: Readonly<Record<string, string>>;
}

export interface ReadPng extends PngPicture {
  readonly pixel?: number;
  readonly text: Readonly<Record<string, string>>;
}

const SIGNATURE_LENGTH = 8;

/** CRC-32 of the PNG specification, annex D: polynomial edb88320, reflected. */
export function crc32(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (const byte of bytes) {
    crc ^= byte;
    for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ 0xedb88320 : crc >>> 1;
  }
  return (crc ^ 0xffffffff) >>> 0;
}

function chunk(type: string, body: Uint8Array): Uint8Array {
  const bytes = new Uint8Array(12 + body.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, body.length);
  for (let n = 0; n < 4; n++) bytes[4 + n] = type.charCodeAt(n);
  bytes.set(body, 8);
  view.setUint32(8 + body.length, crc32(bytes.subarray(4, 8 + body.length)));
  return bytes;
}

function pixelSizeChunk(pixel: number): Uint8Array {
  const perMetre = Math.round(1 / pixel);
  if (!(perMetre >= 1 && perMetre <= 0x7fffffff)) throw new RangeError(`a pixel cannot be ${pixel} m wide`);
  const body = new Uint8Array(9);
  const view = new DataView(body.buffer);
  view.setUint32(0, perMetre);
  view.setUint32(4, perMetre);
  view.setUint8(8, 1);
  return chunk('pHYs', body);
}

function latin1(text: string): Uint8Array | undefined {
  const bytes = new Uint8Array(text.length);
  for (let n = 0; n < text.length; n++) {
    const code = text.charCodeAt(n);
    if (code > 255 || code === 0) return undefined;
    bytes[n] = code;
  }
  return bytes;
}

function joinedBytes(parts: readonly Uint8Array[]): Uint8Array {
  const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    bytes.set(part, at);
    at += part.length;
  }
  return bytes;
}

/** tEXt where Latin-1 holds the text, else iTXt in UTF-8, uncompressed, without language. */
function textChunk(keyword: string, text: string): Uint8Array {
  const key = latin1(keyword);
  if (key === undefined || key.length < 1 || key.length > 79)
    throw new RangeError('a keyword is 1 to 79 Latin-1 characters');
  const clean = text.replaceAll('\0', '');
  const plain = latin1(clean);
  const zero = Uint8Array.of(0);
  if (plain !== undefined) return chunk('tEXt', joinedBytes([key, zero, plain]));
  return chunk('iTXt', joinedBytes([key, zero, Uint8Array.of(0, 0, 0, 0), new TextEncoder().encode(clean)]));
}

/** Every row with the filter "up minus" would need own code; the library writes unfiltered rows, so deflate works harder. */
const DEFLATE_LEVEL = 6;

/** A PNG of the picture. Opaque pictures are written without alpha. The same picture and notes give the same bytes. */
export function encodePng(picture: PngPicture, notes: PngNotes = {}): Uint8Array {
  const { width, height } = picture;
  const opaque = isOpaque(picture.data);
  const data = opaque ? withoutAlpha(picture.data) : picture.data;
  const bytes = encode({ width, height, data, channels: opaque ? 3 : 4, depth: 8 }, { zlib: { level: DEFLATE_LEVEL } });
  const extra: Uint8Array[] = [];
  if (notes.pixel !== undefined) extra.push(pixelSizeChunk(notes.pixel));
  for (const [keyword, text] of Object.entries(notes.text ?? {})) extra.push(textChunk(keyword, text));
  // after the header chunk, which is 13 bytes long, and before the image data
  const head = SIGNATURE_LENGTH + 12 + 13;
  return joinedBytes([bytes.subarray(0, head), ...extra, bytes.subarray(head)]);
}

function isOpaque(data: Uint8Array | Uint8ClampedArray): boolean {
  for (let at = 3; at < data.length; at += 4) if (data[at] !== 255) return false;
  return true;
}

function withoutAlpha(data: Uint8Array | Uint8ClampedArray): Uint8Array {
  const rgb = new Uint8Array((data.length / 4) * 3);
  for (let from = 0, to = 0; from < data.length; from += 4, to += 3) {
    rgb[to] = data[from] as number;
    rgb[to + 1] = data[from + 1] as number;
    rgb[to + 2] = data[from + 2] as number;
  }
  return rgb;
}

/** Texts of the iTXt chunks that are not compressed; the library reads tEXt only. */
function internationalTexts(bytes: Uint8Array): Record<string, string> {
  const texts: Record<string, string> = {};
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  for (let at = SIGNATURE_LENGTH; at + 12 <= bytes.length; at += 12 + view.getUint32(at)) {
    if (String.fromCharCode(...bytes.subarray(at + 4, at + 8)) !== 'iTXt') continue;
    const body = bytes.subarray(at + 8, at + 8 + view.getUint32(at));
    const keyEnd = body.indexOf(0);
    if (keyEnd < 1 || body[keyEnd + 1] !== 0) continue;
    const languageEnd = body.indexOf(0, keyEnd + 3);
    const translatedEnd = body.indexOf(0, languageEnd + 1);
    if (languageEnd < 0 || translatedEnd < 0) continue;
    texts[String.fromCharCode(...body.subarray(0, keyEnd))] = new TextDecoder().decode(
      body.subarray(translatedEnd + 1),
    );
  }
  return texts;
}

function toRgba(png: DecodedPng): Uint8Array {
  const { width, height, channels, data, depth } = png;
  if (depth !== 8 || png.palette !== undefined) throw new RangeError('only PNG files of 8 bits a channel are read');
  const rgba = new Uint8Array(width * height * 4);
  for (let n = 0; n < width * height; n++) {
    const at = n * channels;
    const grey = channels < 3;
    for (let c = 0; c < 3; c++) rgba[4 * n + c] = data[at + (grey ? 0 : c)] as number;
    rgba[4 * n + 3] = channels === 2 || channels === 4 ? (data[at + channels - 1] as number) : 255;
  }
  return rgba;
}

/** Reads a PNG of 8 bits a channel. Checks every chunk; throws on a damaged file. */
export function decodePng(bytes: Uint8Array): ReadPng {
  const png = decode(bytes, { checkCrc: true });
  const { resolution } = png;
  const text = { ...png.text, ...internationalTexts(bytes) };
  const picture = { width: png.width, height: png.height, data: toRgba(png), text };
  return resolution?.unit === 1 && resolution.x > 0 ? { ...picture, pixel: 1 / resolution.x } : picture;
}
