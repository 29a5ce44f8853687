/** What a soft sensor in service may be: the four words of the registry. */
export type Health = 'fit' | 'watch' | 'unfit' | 'unproven';

export interface HealthGeometry {
  word: string;
  rails: [upper: number, lower: number];
  railWidth: number;
  dashed: boolean;
  /** Centre height and radius; the bead stands at x 12. None where nothing is proven. */
  bead: { y: number; r: number } | null;
}

/** The bead between the rails of the allowed error, on 16 × 16; shapes differ so that colour is never needed. */
export const HEALTH_GEOMETRY: Record<Health, HealthGeometry> = {
  fit: { word: 'Fit', rails: [4, 12], railWidth: 1.25, dashed: false, bead: { y: 8, r: 2 } },
  watch: { word: 'Watch', rails: [5, 13], railWidth: 1.75, dashed: false, bead: { y: 5, r: 3.5 } },
  unfit: { word: 'Unfit', rails: [9.5, 14.5], railWidth: 2.25, dashed: false, bead: { y: 3.75, r: 3.5 } },
  unproven: { word: 'Unproven', rails: [4, 12], railWidth: 1.25, dashed: true, bead: null },
};
