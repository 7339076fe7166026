import { refuse, type Refusal } from '../../domain/refusals';
import type { Database } from '../db/client';
import { transact } from '../db/transaction';
import type { Act } from './act';
import { keepRawFile, type IncomingFile } from './rawFiles';
import { recordTrail } from './trail';

/** A file that is no spectrum is no measurement: it is kept with the reason, and no attempt is counted. */
export async function refuseFile(
  db: Database,
  act: Act,
  barcode: string,
  file: IncomingFile,
  problem: { code: string; message: string; line?: number }
): Promise<Refusal> {
  const detail = problem.line === undefined ? problem.message : `Line ${problem.line}: ${problem.message}`;
  await transact(db, async (tx) => {
    const kept = problem.code === 'too-large' ? null : await keepRawFile(tx, file);
    await recordTrail(tx, act, {
      action: 'scan.file-refused',
      recordType: 'container',
      recordId: barcode,
      recordLabel: `Container ${barcode}`,
      after: {
        fileName: file.fileName.slice(0, 255),
        size: file.bytes.byteLength,
        sha256: kept?.sha256 ?? null,
        problem: problem.code,
        detail
      }
    });
  });
  const code = problem.code === 'too-large' ? 'too-large' : 'bad-file';
  return refuse(code, detail, { file: detail });
}
