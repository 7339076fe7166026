import type { Transaction } from '../db/client';
import { queueMail } from './mail';

interface MailedLot {
  readonly id: string;
  readonly lotNumber: string;
}

/** Tells QA that a container failed: a link and no result, since mail is read by others too. */
export const mailOfFail = (tx: Transaction, siteId: string, lot: MailedLot): Promise<number> =>
  queueMail(tx, {
    to: { action: 'deviation.close', siteId },
    kind: 'scan-failed',
    subject: `[Wharfinger] Lot ${lot.lotNumber}: a container failed`,
    body: 'A container failed its identity test in the scan bay. It is locked and a deviation is open.',
    link: `/lots/${lot.id}`
  });

/** Tells QA that a lot waits for its disposition. */
export const mailOfReadyLot = (tx: Transaction, siteId: string, lot: MailedLot): Promise<number> =>
  queueMail(tx, {
    to: { action: 'lot.release', siteId },
    kind: 'lot-ready',
    subject: `[Wharfinger] Lot ${lot.lotNumber}: review asked`,
    body: 'Every container of the lot has passed. It waits for its disposition.',
    link: `/lots/${lot.id}`
  });
