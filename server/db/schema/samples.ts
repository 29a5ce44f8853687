import { sql } from 'drizzle-orm';
import {
  bigint,
  check,
  date,
  doublePrecision,
  foreignKey,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  unique,
  uniqueIndex,
  uuid,
} from 'drizzle-orm/pg-core';
import type { SampleMends } from '../../../shared/contracts/sample-mends.ts';
import type { ProfileMapping } from '../../../shared/contracts/sample-profiles.ts';
import type { SampleCounts, SampleMapping } from '../../../shared/contracts/samples.ts';
import { bigIdentity, identity, instant } from './columns.ts';
import { files } from './files.ts';
import { persons } from './people.ts';
import { sites, units } from './sites.ts';

/** Laboratory methods; r and R are 95 % limits for the difference of two results (ISO 5725). */
export const methods = pgTable(
  'methods',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    name: text('name').notNull(),
    quantity: text('quantity').notNull().default(''),
    unit: text('unit').notNull(),
    repeatability: doublePrecision('repeatability'),
    reproducibility: doublePrecision('reproducibility'),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('methods_site_id_key').on(t.siteId, t.id),
    uniqueIndex('methods_name_key').on(t.siteId, sql`lower(${t.name})`),
    check('methods_precision', sql`${t.repeatability} >= 0 and ${t.reproducibility} >= 0`),
  ],
);

export const samplePoints = pgTable(
  'sample_points',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    unitId: integer('unit_id'),
    name: text('name').notNull(),
    /** Other names under which laboratories send this point. */
    aliases: text('aliases').array().notNull().default([]),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('sample_points_site_id_key').on(t.siteId, t.id),
    uniqueIndex('sample_points_name_key').on(t.siteId, sql`lower(${t.name})`),
    foreignKey({
      name: 'sample_points_unit_fk',
      columns: [t.siteId, t.unitId],
      foreignColumns: [units.siteId, units.id],
    }),
  ],
);

/** How files of a kind are read at a site: accepted once by a person, recognised by the names of their columns afterwards. */
export const importProfiles = pgTable(
  'import_profiles',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    name: text('name').notNull(),
    /** The names of the columns, simplified and in order; what a file is recognised by. */
    signature: text('signature').notNull(),
    mapping: jsonb('mapping').$type<ProfileMapping>().notNull(),
    usedAt: instant('used_at').notNull(),
    uses: integer('uses').notNull().default(0),
    createdBy: integer('created_by')
      .notNull()
      .references(() => persons.id),
    createdAt: instant('created_at').notNull(),
    archivedAt: instant('archived_at'),
    version: integer('version').notNull().default(1),
  },
  (t) => [
    unique('import_profiles_site_id_key').on(t.siteId, t.id),
    uniqueIndex('import_profiles_signature_key')
      .on(t.siteId, t.signature)
      .where(sql`${t.archivedAt} is null`),
  ],
);

/** An uploaded file of reference samples: a dry run first, then committed whole, undone while nothing rests on it. */
export const sampleImports = pgTable(
  'sample_imports',
  {
    id: identity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    fileId: integer('file_id').notNull(),
    fileName: text('file_name').notNull(),
    sha256: text('sha256').notNull(),
    /** The profile by which the file was recognised, or that was made of its mapping. */
    profileId: integer('profile_id'),
    mapping: jsonb('mapping').$type<SampleMapping>(),
    /** What a person wrote in place of cells, by line; the file itself is never changed. */
    mends: jsonb('mends').$type<SampleMends>().notNull().default({}),
    /** Names of sample points that the site does not know, with their rows, as of the last commit. */
    unknownPoints: jsonb('unknown_points').$type<Record<string, number>>().notNull().default({}),
    state: text('state', { enum: ['uploaded', 'committed', 'undone'] })
      .notNull()
      .default('uploaded'),
    counts: jsonb('counts').$type<SampleCounts>(),
    version: integer('version').notNull().default(1),
    createdBy: integer('created_by')
      .notNull()
      .references(() => persons.id),
    createdAt: instant('created_at').notNull(),
    committedAt: instant('committed_at'),
    undoneAt: instant('undone_at'),
    undoneBy: integer('undone_by').references(() => persons.id),
  },
  (t) => [
    unique('sample_imports_site_id_key').on(t.siteId, t.id),
    index('sample_imports_sha').on(t.siteId, t.sha256),
    foreignKey({
      name: 'sample_imports_file_fk',
      columns: [t.siteId, t.fileId],
      foreignColumns: [files.siteId, files.id],
    }),
    foreignKey({
      name: 'sample_imports_profile_fk',
      columns: [t.siteId, t.profileId],
      foreignColumns: [importProfiles.siteId, importProfiles.id],
    }),
    check('sample_imports_state', sql`${t.state} in ('uploaded', 'committed', 'undone')`),
    check(
      'sample_imports_committed',
      sql`(${t.committedAt} is not null) = (${t.state} in ('committed', 'undone'))`,
    ),
  ],
);

/**
 * One version of one laboratory result. A correction is a new row that supersedes; an undone import sets `withdrawnAt`.
 * A result beyond the method's range keeps its limit in `value` and '<' or '>' in `qualifier`. A date without a time
 * is kept in `takenOn` and never paired.
 */
export const samples = pgTable(
  'samples',
  {
    id: bigIdentity(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id),
    samplePointId: integer('sample_point_id').notNull(),
    methodId: integer('method_id'),
    sampleNumber: text('sample_number').notNull(),
    version: integer('version').notNull().default(1),
    takenAt: instant('taken_at'),
    takenOn: date('taken_on', { mode: 'string' }),
    reportedAt: instant('reported_at').notNull(),
    value: doublePrecision('value').notNull(),
    qualifier: text('qualifier', { enum: ['<', '>'] }),
    unit: text('unit').notNull(),
    asWritten: text('as_written').notNull(),
    flags: text('flags').array().notNull().default([]),
    heldSince: instant('held_since'),
    /** What the laboratory wrote where the unit of the method differs from it. */
    statedUnit: text('stated_unit'),
    statedValue: doublePrecision('stated_value'),
    /** Single results under repeatability conditions, of which `value` is the mean. */
    replicates: doublePrecision('replicates').array(),
    /** A composite gathered over this long, ending at `takenAt`. */
    compositeMs: integer('composite_ms'),
    analyst: text('analyst'),
    /** The version that this one takes the place of, and why. */
    supersedesId: bigint('supersedes_id', { mode: 'number' }),
    changeReason: text('change_reason'),
    /** Made by the device that entered it, so that sending twice adds once. */
    entryKey: uuid('entry_key'),
    importId: integer('import_id'),
    line: integer('line'),
    enteredBy: integer('entered_by')
      .notNull()
      .references(() => persons.id),
    enteredAt: instant('entered_at').notNull(),
    supersededAt: instant('superseded_at'),
    withdrawnAt: instant('withdrawn_at'),
  },
  (t) => [
    unique('samples_site_id_key').on(t.siteId, t.id),
    uniqueIndex('samples_current_key')
      .on(t.siteId, t.samplePointId, sql`coalesce(${t.methodId}, 0)`, t.sampleNumber)
      .where(sql`${t.supersededAt} is null and ${t.withdrawnAt} is null`),
    index('samples_taken').on(t.siteId, t.samplePointId, t.takenAt),
    index('samples_import').on(t.siteId, t.importId),
    unique('samples_entry_key').on(t.siteId, t.entryKey),
    index('samples_held')
      .on(t.siteId)
      .where(sql`${t.heldSince} is not null and ${t.supersededAt} is null and ${t.withdrawnAt} is null`),
    foreignKey({
      name: 'samples_supersedes_fk',
      columns: [t.siteId, t.supersedesId],
      foreignColumns: [t.siteId, t.id],
    }),
    check('samples_reason_of_change', sql`(${t.supersedesId} is null) = (${t.changeReason} is null)`),
    foreignKey({
      name: 'samples_point_fk',
      columns: [t.siteId, t.samplePointId],
      foreignColumns: [samplePoints.siteId, samplePoints.id],
    }),
    foreignKey({
      name: 'samples_method_fk',
      columns: [t.siteId, t.methodId],
      foreignColumns: [methods.siteId, methods.id],
    }),
    foreignKey({
      name: 'samples_import_fk',
      columns: [t.siteId, t.importId],
      foreignColumns: [sampleImports.siteId, sampleImports.id],
    }),
    check('samples_taken_known', sql`(${t.takenAt} is null) <> (${t.takenOn} is null)`),
    check('samples_qualifier', sql`${t.qualifier} in ('<', '>')`),
  ],
);
