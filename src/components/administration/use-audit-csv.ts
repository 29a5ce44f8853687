import { useQuasar } from 'quasar';
import { ref } from 'vue';
import { formatCount } from '../../../shared/rules/format.ts';
import { sayError } from '../../api/problem.ts';
import { type CsvCell, useCsvDownload } from '../../composables/use-csv-download.ts';
import { allAudit, type AuditFilter } from '../../queries/audit.ts';

const mostRows = 10_000;
const header = [
  'At',
  'Person',
  'Action',
  'Kind',
  'Number',
  'Name',
  'Site',
  'Reason',
  'From',
  'Before',
  'After',
  'Request',
];
const json = (value: unknown): CsvCell => (value === null ? '' : JSON.stringify(value));

/** Every entry that matches as a CSV file, fetched page by page; `gathered` counts them meanwhile, else null. */
export function useAuditCsv() {
  const $q = useQuasar();
  const download = useCsvDownload();
  const gathered = ref<number | null>(null);

  async function save(filter: AuditFilter): Promise<void> {
    gathered.value = 0;
    try {
      const { rows, total } = await allAudit(filter, mostRows, (count) => (gathered.value = count));
      const cells = rows.map((row): CsvCell[] => [
        row.at,
        row.personName,
        row.action,
        row.entity,
        row.entityId,
        row.entityName,
        row.siteName,
        row.reason,
        row.fromAddress,
        json(row.before),
        json(row.after),
        row.requestId,
      ]);
      download('Audit trail', header, cells);
      if (total > rows.length) {
        $q.notify(
          `The newest ${formatCount(rows.length)} of ${formatCount(total)} entries are in the file. Narrow the list for older ones.`,
        );
      }
    } catch (error) {
      $q.notify(sayError(error).detail);
    } finally {
      gathered.value = null;
    }
  }
  return { gathered, save };
}
