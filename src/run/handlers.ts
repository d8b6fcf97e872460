import { initRaster, type RasterFonts, type Rasteriser } from '#src/formats/raster.ts';
import { checkJob } from './check-job.ts';
import { cutJob } from './cut-job.ts';
import { estimateJob } from './estimate-job.ts';
import type { Port } from './port.ts';
import type { Handlers } from './serve.ts';

/** What drawing to pixels needs: the drawing module's WebAssembly and the fonts. */
export interface Assets {
  readonly module: Uint8Array;
  readonly fonts: RasterFonts;
}

/** What a host gives the engine. */
export interface Equipment {
  readonly assets: () => Promise<Assets>;
  /** Threads beside the engine's own that share tiles; none for one thread. */
  readonly helpers: readonly Port[];
}

/** The engine's answers to every request. */
export function engineHandlers({ assets, helpers }: Equipment): Handlers {
  let rasteriser: Promise<Rasteriser> | undefined;
  let cutting = false;
  const startDrawing = async () => {
    const { module, fonts } = await assets();
    return initRaster(module, fonts);
  };
  return {
    check: (request) => ({ value: checkJob(request) }),
    estimate: (request) => ({ value: estimateJob(request) }),
    async cut(request, context) {
      // helpers serve one cut at a time; another cut meanwhile runs on this thread alone
      const free = cutting ? [] : helpers;
      const mine = free.length > 0;
      if (mine) cutting = true;
      try {
        const drawing = () => (rasteriser ??= startDrawing());
        const value = await cutJob(request, context, { helpers: free, rasteriser: drawing });
        const transfer = value.state === 'done' ? value.artefacts.map(({ bytes }) => bytes.buffer) : [];
        return { value, transfer };
      } finally {
        if (mine) cutting = false;
      }
    },
  };
}
