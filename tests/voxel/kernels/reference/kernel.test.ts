import { createReferenceKernel } from '#src/voxel/kernels/reference/kernel.ts';
import { kernelSpec } from '../../../specs/kernel.ts';

kernelSpec(createReferenceKernel, 64);
