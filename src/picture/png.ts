import { deflateSync } from "node:zlib";

export interface IndexedPicture {
  width: number;
  height: number;
  /** 1 per pixel, rows from the top: index into the palette */
  pixels: Uint8Array;
  /** 4 per colour: red, green, blue, opacity, 0..255; at most 256 colours */
  palette: Uint8Array;
}

/** A picture with a palette as a PNG file (ISO/IEC 15948): colour type 3, eight bits, with opacities. */
export function png({ width, height, pixels, palette }: IndexedPicture): Uint8Array {
  const header = Buffer.alloc(13);
  header.writeUInt32BE(width, 0);
  header.writeUInt32BE(height, 4);
  header.set([8, 3, 0, 0, 0], 8);
  const colours = palette.length / 4;
  const red = Buffer.alloc(3 * colours);
  const opacity = Buffer.alloc(colours);
  for (let k = 0; k < colours; k++) {
    red.set(palette.subarray(4 * k, 4 * k + 3), 3 * k);
    opacity[k] = palette[4 * k + 3];
  }
  // Every row begins with its filter: none, which suits a palette.
  const rows = Buffer.alloc((width + 1) * height);
  for (let y = 0; y < height; y++) rows.set(pixels.subarray(y * width, (y + 1) * width), y * (width + 1) + 1);
  return Buffer.concat([
    Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]),
    chunk("IHDR", header),
    chunk("PLTE", red),
    chunk("tRNS", opacity),
    chunk("IDAT", deflateSync(rows, { level: 9 })),
    chunk("IEND", Buffer.alloc(0)),
  ]);
}

/** A picture of `3 * width * height` bytes, red, green, blue, rows from the top, as a PNG file: colour type 2, eight bits. */
export function colourPng(width: number, height: number, rgb: Uint8Array): Uint8Array {
  const header = Buffer.alloc(13);
  header.writeUInt32BE(width, 0);
  header.writeUInt32BE(height, 4);
  header.set([8, 2, 0, 0, 0], 8);
  const row = 3 * width;
  const rows = Buffer.alloc((row + 1) * height);
  // Every byte as its change from the pixel to the left (filter 1): flat areas and lines become zeros.
  for (let y = 0, to = 0; y < height; y++) {
    rows[to++] = 1;
    for (let x = 0, from = y * row; x < row; x++, from++) rows[to++] = rgb[from] - (x < 3 ? 0 : rgb[from - 3]);
  }
  return Buffer.concat([
    Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]),
    chunk("IHDR", header),
    chunk("IDAT", deflateSync(rows, { level: 6 })),
    chunk("IEND", Buffer.alloc(0)),
  ]);
}

function chunk(type: string, data: Buffer): Buffer {
  const result = Buffer.alloc(12 + data.length);
  result.writeUInt32BE(data.length, 0);
  result.write(type, 4, "latin1");
  data.copy(result, 8);
  result.writeUInt32BE(check(result.subarray(4, 8 + data.length)), 8 + data.length);
  return result;
}

/** Remainders of the check for every byte, polynomial 0xEDB88320 (ISO/IEC 15948, annex D). */
const remainders = Uint32Array.from({ length: 256 }, (_, byte) => {
  let value = byte;
  for (let bit = 0; bit < 8; bit++) value = value & 1 ? 0xedb88320 ^ (value >>> 1) : value >>> 1;
  return value;
});

function check(bytes: Uint8Array): number {
  let value = 0xffffffff;
  for (const byte of bytes) value = remainders[(value ^ byte) & 255] ^ (value >>> 8);
  return (value ^ 0xffffffff) >>> 0;
}
