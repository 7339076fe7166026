import type { Verdict } from '../identity/decision';

/** Everything an identity certificate states; rendering is a pure function of it. */
export interface CertificateData {
  readonly number: string;
  readonly verificationCode: string;
  /** Address of the public verification page for the code; goes into the QR code. */
  readonly verificationUrl: string;
  readonly demo: boolean;
  readonly site: { readonly name: string; readonly dock: string; readonly timeZone: string };
  readonly issuedAt: Date;
  readonly issuedBy: string;
  readonly lot: {
    readonly lotNumber: string;
    readonly manufacturerBatch: string;
    readonly manufacturer: string;
    readonly supplier: string;
    readonly delivery: string;
    readonly deliveryNote: string;
    readonly arrivedOn: string;
    readonly expiresOn: string | null;
    readonly retestOn: string | null;
    readonly containerCount: number;
    readonly samplingPlan: string;
  };
  readonly material: {
    readonly itemCode: string;
    readonly name: string;
    readonly casNumber: string | null;
    readonly grade: string;
  };
  readonly highRisk: boolean;
  readonly limitTest: string | null;
  readonly method: {
    readonly code: string;
    readonly version: number;
    readonly bundleSha256: string;
    readonly recipe: readonly string[];
    readonly referenceCount: number;
    readonly sourceCount: number;
    readonly engineVersion: string;
  };
  readonly attempts: readonly CertificateAttempt[];
  readonly checks: readonly {
    readonly instrument: string;
    readonly serial: string;
    readonly excitationNm: number;
    readonly standard: string;
    readonly performedAt: Date;
    readonly outcome: string;
  }[];
  readonly plots: readonly CertificatePlot[];
  readonly deviations: readonly {
    readonly number: string;
    readonly title: string;
    readonly conclusion: string;
  }[];
  readonly disposition: { readonly outcome: 'release' | 'reject'; readonly reason: string };
  readonly signature: {
    readonly printedName: string;
    readonly role: string;
    readonly meaning: string;
    readonly signedAt: Date;
    readonly recordSha256: string;
  };
  readonly treeHead: { readonly size: number; readonly rootHash: string } | null;
}

/** One scan of one container: every attempt is printed, whatever its verdict. */
export interface CertificateAttempt {
  readonly containerNumber: number;
  readonly attempt: number;
  readonly verdict: Verdict;
  readonly nearLimit: boolean;
  readonly correlation: number | null;
  readonly correlationLimit: number | null;
  readonly hotellingT2: number | null;
  readonly t2Limit: number | null;
  readonly qResidual: number | null;
  readonly qLimit: number | null;
  readonly instrument: string;
  readonly operatorName: string;
  readonly recordedAt: Date;
  readonly reason: string;
}

/** A scan over the envelope of its references. All arrays have the grid's length. */
export interface CertificatePlot {
  readonly title: string;
  readonly gridCm1: readonly number[];
  readonly scan: readonly number[];
  readonly mean: readonly number[];
  readonly low: readonly number[];
  readonly high: readonly number[];
}

const CODE_ALPHABET = '0123456789ABCDEFGHJKMNPQRSTVWXYZ';

/** A verification code of 16 characters (80 bits) from random bytes; no letters that look like digits. */
export function verificationCode(random: Uint8Array): string {
  if (random.length < 16) throw new Error('16 random bytes are needed');
  return Array.from(random.subarray(0, 16), (byte) => CODE_ALPHABET[byte % 32]).join('');
}

/** The code in groups of four, as people read it. */
export const groupedCode = (code: string): string => code.replace(/(.{4})(?=.)/g, '$1-');
