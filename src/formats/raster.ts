import { initWasm, Resvg } from '@resvg/resvg-wasm';

/** Vector drawings to pixels, with the fonts given as bytes so that every host draws the same picture. */

export interface RasterFonts {
  readonly regular: Uint8Array;
  readonly semiBold: Uint8Array;
}

export interface Raster {
  readonly width: number;
  readonly height: number;
  /** Red, green, blue, alpha 0..255, alpha not multiplied in, row after row from the top. */
  readonly data: Uint8ClampedArray;
}

let started: Promise<void> | undefined;

/** A rasteriser that owns its fonts; `rasterise` draws an SVG document `width` pixels wide. */
export interface Rasteriser {
  rasterise(svg: string, width: number): Raster;
}

/** Starts the drawing module, once per process, from the bytes of its WebAssembly file. */
export async function initRaster(wasmBytes: Uint8Array, fonts: RasterFonts): Promise<Rasteriser> {
  started ??= initWasm(Uint8Array.from(wasmBytes));
  await started;
  const fontBuffers = [fonts.regular, fonts.semiBold];
  return { rasterise: (svg, width) => rasterise(svg, width, fontBuffers) };
}

function rasterise(svg: string, width: number, fontBuffers: Uint8Array[]): Raster {
  if (!Number.isInteger(width) || width < 1)
    throw new RangeError(`a picture is a whole number of pixels wide, got ${width}`);
  const drawing = new Resvg(svg, {
    fitTo: { mode: 'width', value: width },
    font: { fontBuffers, defaultFontFamily: 'Inter', sansSerifFamily: 'Inter' },
  });
  try {
    const image = drawing.render();
    try {
      return { width: image.width, height: image.height, data: straightAlpha(image.pixels) };
    } finally {
      image.free();
    }
  } finally {
    drawing.free();
  }
}

/** The module multiplies colours by alpha; pictures and PNG want them straight. */
function straightAlpha(pixels: Uint8Array): Uint8ClampedArray {
  const data = new Uint8ClampedArray(pixels.length);
  for (let at = 0; at < pixels.length; at += 4) {
    const alpha = pixels[at + 3] as number;
    for (let c = 0; c < 3; c++) data[at + c] = alpha === 0 ? 0 : Math.round(((pixels[at + c] as number) * 255) / alpha);
    data[at + 3] = alpha;
  }
  return data;
}

/** Lays `over` upon `under` (Porter and Duff 1984, "over") and returns the new picture. Throws RangeError on unequal sizes. */
export function laidOver(under: Raster, over: Raster): Raster {
  if (under.width !== over.width || under.height !== over.height) {
    throw new RangeError(
      `pictures of ${under.width} x ${under.height} and ${over.width} x ${over.height} pixels do not match`,
    );
  }
  const data = new Uint8ClampedArray(under.data);
  for (let at = 0; at < data.length; at += 4) {
    const top = (over.data[at + 3] as number) / 255;
    if (top === 0) continue;
    const rest = ((data[at + 3] as number) / 255) * (1 - top);
    const alpha = top + rest;
    for (let c = 0; c < 3; c++) {
      data[at + c] = Math.round(((over.data[at + c] as number) * top + (data[at + c] as number) * rest) / alpha);
    }
    data[at + 3] = Math.round(255 * alpha);
  }
  return { width: under.width, height: under.height, data };
}
