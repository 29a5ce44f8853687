import type { Context } from '../../server/context.ts';
import { tags } from '../../server/db/schema/index.ts';
import type { By } from '../../server/features/register/service.ts';
import { addArea, addUnit } from '../../server/features/sites/service.ts';
import type { DemoUnit } from '../simulation/unit.ts';
import type { SiteScene } from './scene.ts';

/** Adds the areas and units of a site, and the measured tags of each unit. */
export async function addPlaces(
  context: Context,
  by: By,
  site: SiteScene,
  units: readonly DemoUnit[],
): Promise<void> {
  const areas = new Map<string, number>();
  for (const unit of units) {
    if (!areas.has(unit.area)) {
      const area = await addArea(context, by, site.row, { name: unit.area });
      areas.set(unit.area, area.id);
    }
    const { id: unitId } = await addUnit(context, by, site.row, {
      name: unit.name,
      areaId: areas.get(unit.area)!,
    });
    site.units.set(unit.name, unitId);
    const made = await context.db
      .insert(tags)
      .values(
        unit.instruments.map(({ tag, description, unit: of }) => ({
          siteId: site.row.id,
          unitId,
          name: tag,
          description,
          unit: of,
        })),
      )
      .returning();
    for (const tag of made) site.tags.set(tag.name, tag.id);
  }
}
