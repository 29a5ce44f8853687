import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { kernelSource, unrolledSizes } from './kernel-source.ts';

/* npx tsx shared/numerics/kernels/generate.ts writes the files of generated/ anew. */
for (const n of unrolledSizes) {
  writeFileSync(fileURLToPath(new URL(`generated/states-${n}.ts`, import.meta.url)), kernelSource(n));
}
