import type { Decision } from '$lib/identity/decision';
import type { EvidenceView } from '$lib/identity/evidence';

export interface ScanAnswer {
  readonly scanId: string;
  readonly containerNumber: number;
  readonly attempt: number;
  readonly decision: Decision;
  readonly evidence: EvidenceView | null;
}

export interface ScanProblem {
  readonly title: string;
  readonly detail: string;
  readonly next: string;
}

export interface OutgoingScan {
  readonly file: File;
  readonly barcode: string;
  readonly lotId: string;
  readonly instrumentId: string;
  readonly repeatReason: string;
}

const RETRIES = 3;

/**
 * Sends one scan. The id is made here, so sending again after a lost answer records nothing twice; the
 * decision is only ever the server's.
 */
export async function sendScan(
  scan: OutgoingScan
): Promise<{ ok: true; answer: ScanAnswer } | { ok: false; problem: ScanProblem }> {
  const body = new FormData();
  body.set('scanId', crypto.randomUUID());
  body.set('barcode', scan.barcode);
  body.set('lotId', scan.lotId);
  body.set('instrumentId', scan.instrumentId);
  body.set('repeatReason', scan.repeatReason);
  body.set('clientTime', new Date().toISOString());
  body.set('file', scan.file);
  for (let attempt = 0; attempt <= RETRIES; attempt++) {
    try {
      const response = await fetch('/api/v1/scans', {
        method: 'POST',
        body,
        headers: { accept: 'application/json' }
      });
      const content: unknown = await response.json();
      if (response.ok) return { ok: true, answer: content as ScanAnswer };
      const { title, detail, next } = content as Partial<ScanProblem>;
      return {
        ok: false,
        problem: {
          title: title ?? 'Not scanned',
          detail: detail ?? 'The server refused the scan.',
          next: next ?? ''
        }
      };
    } catch {
      await new Promise((resolve) => setTimeout(resolve, 400 * 2 ** attempt));
    }
  }
  return {
    ok: false,
    problem: {
      title: 'Not saved',
      detail: 'The server could not be reached, so this scan has no decision yet.',
      next: 'Keep the file, check the network and choose the file again.'
    }
  };
}
