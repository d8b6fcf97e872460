import abrasives from '../../resources/abrasives.json' with { type: 'json' };
import grits from '../../resources/grits.json' with { type: 'json' };
import materials from '../../resources/materials.json' with { type: 'json' };
import tools from '../../resources/tool-materials.json' with { type: 'json' };
import { loadLibrary } from './library.ts';

/** The library that comes with the program: inside the bundle, checked when it is loaded. */
export const stockLibrary = loadLibrary({ materials, tools, abrasives, grits });
