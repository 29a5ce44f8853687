import { existsSync } from 'node:fs';
import path from 'node:path';

/** Folder of an open data set beside the project; no file of it belongs to the project. */
export const plantData = (name: string): string => path.resolve('../shared/data', name);

/** Why tests on a data set are skipped, or false where it is there. */
export const withoutData = (name: string): boolean => !existsSync(plantData(name));
