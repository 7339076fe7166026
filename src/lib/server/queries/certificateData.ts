import { desc, eq, inArray } from 'drizzle-orm';
import { evidenceOf } from '../../identity/evidence';
import type { Decision } from '../../identity/decision';
import type { CertificateAttempt, CertificateData, CertificatePlot } from '../../domain/certificate';
import { ROLE_NAMES, type RoleId } from '../../domain/roles';
import { stepTitle } from '../../domain/stepText';
import type { Executor } from '../db/client';
import { decisions, instruments, performanceChecks, scans, treeHeads } from '../db/schema';
import { loadDecisionInputs } from './decisionInputs';
import type { LotDetail } from './lots';
import { getMethodVersion, getStoredMethod } from './methods';
import { getSite } from './people';
import { parseDecision } from './scans';

/** Most plots a certificate carries: closest to a limit, typical, and those that did not pass. */
const MAX_PLOTS = 4;

export interface CertificateInputs {
  readonly detail: LotDetail;
  readonly number: string;
  readonly code: string;
  readonly origin: string;
  readonly outcome: 'release' | 'reject';
  readonly reason: string;
  readonly signature: {
    readonly printedName: string;
    readonly role: string;
    readonly meaning: string;
    readonly signedAt: Date;
    readonly sha256: string;
  };
}

/** Gathers everything the certificate of a lot states, from the record alone. */
export async function getCertificateData(db: Executor, inputs: CertificateInputs): Promise<CertificateData> {
  const { detail, signature } = inputs;
  const site = await getSite(db, detail.delivery.siteId);
  if (!site || !detail.lot.methodVersionId)
    throw new Error(`lot ${detail.lot.lotNumber} has no site or method`);
  const version = await getMethodVersion(db, detail.lot.methodVersionId);
  const stored = await getStoredMethod(db, detail.lot.methodVersionId);
  if (!version || !stored) throw new Error(`lot ${detail.lot.lotNumber} has lost its method`);
  const results = await loadResults(db, detail);
  const [head] = await db.select().from(treeHeads).orderBy(desc(treeHeads.size)).limit(1);
  return {
    number: inputs.number,
    verificationCode: inputs.code,
    verificationUrl: `${inputs.origin}/verify/${inputs.code}`,
    demo: site.demo,
    site: { name: site.name, dock: site.dock, timeZone: site.timeZone },
    issuedAt: signature.signedAt,
    issuedBy: signature.printedName,
    lot: {
      lotNumber: detail.lot.lotNumber,
      manufacturerBatch: detail.lot.manufacturerBatch,
      manufacturer: detail.manufacturer.name,
      supplier: detail.supplier.name,
      delivery: detail.delivery.number,
      deliveryNote: detail.delivery.deliveryNote,
      arrivedOn: detail.delivery.arrivedOn,
      expiresOn: detail.lot.expiresOn,
      retestOn: detail.lot.retestOn,
      containerCount: detail.lot.containerCount,
      samplingPlan:
        detail.lot.samplingPlan === 'every_container'
          ? 'every container'
          : 'reduced, by approved justification'
    },
    material: detail.material,
    highRisk: detail.material.degEgHighRisk,
    limitTest: detail.limitTests[0]
      ? `${detail.limitTests[0].outcome === 'complies' ? 'complies' : 'does not comply'}, report ${detail.limitTests[0].reportNumber}`
      : null,
    method: {
      code: version.method.code,
      version: version.version.version,
      bundleSha256: stored.sha256,
      recipe: stored.fitted.definition.recipe.map(stepTitle),
      referenceCount: stored.fitted.referenceCount,
      sourceCount: stored.fitted.sourceCount,
      engineVersion: stored.fitted.engineVersion
    },
    attempts: detail.scans.map((scan) => attemptOf(scan, results.get(scan.id))),
    checks: await loadChecks(db, detail),
    plots: await loadPlots(db, detail, results),
    deviations: detail.deviations.map((row) => ({
      number: row.number,
      title: row.title,
      conclusion: row.phase === 'closed' ? `Closed: ${row.cause ?? ''}` : 'Open.'
    })),
    disposition: { outcome: inputs.outcome, reason: inputs.reason },
    signature: {
      printedName: signature.printedName,
      role: ROLE_NAMES[signature.role as RoleId] ?? signature.role,
      meaning: signature.meaning,
      signedAt: signature.signedAt,
      recordSha256: signature.sha256
    },
    treeHead: head ? { size: head.size, rootHash: head.rootHash } : null
  };
}

async function loadResults(db: Executor, detail: LotDetail): Promise<Map<string, Decision>> {
  const ids = detail.scans.map((scan) => scan.id);
  if (ids.length === 0) return new Map();
  const rows = await db
    .select({ scanId: decisions.scanId, result: decisions.result })
    .from(decisions)
    .where(inArray(decisions.scanId, ids));
  return new Map(rows.map((row) => [row.scanId, parseDecision(row.result)]));
}

function attemptOf(scan: LotDetail['scans'][number], decision: Decision | undefined): CertificateAttempt {
  const limitOf = (code: string) =>
    decision?.criteria.find((criterion) => criterion.code === code)?.limit ?? null;
  return {
    containerNumber: scan.containerNumber,
    attempt: scan.attempt,
    verdict: scan.verdict,
    nearLimit: scan.nearLimit,
    correlation: scan.correlation,
    correlationLimit: limitOf('correlation'),
    hotellingT2: scan.hotellingT2,
    t2Limit: limitOf('hotelling-t2'),
    qResidual: scan.qResidual,
    qLimit: limitOf('q-residual'),
    instrument: scan.instrument,
    operatorName: scan.operatorName,
    recordedAt: scan.recordedAt,
    reason: [
      decision?.explanation.reason ?? '',
      scan.repeatReason ? `Repeated because: ${scan.repeatReason}` : ''
    ]
      .filter((part) => part !== '')
      .join(' ')
  };
}

async function loadChecks(db: Executor, detail: LotDetail): Promise<CertificateData['checks']> {
  const rows = await db
    .selectDistinctOn([performanceChecks.id], {
      instrument: instruments.name,
      serial: instruments.serial,
      excitationNm: instruments.excitationNm,
      standard: performanceChecks.standard,
      performedAt: performanceChecks.performedAt,
      passed: performanceChecks.passed
    })
    .from(scans)
    .innerJoin(performanceChecks, eq(performanceChecks.id, scans.performanceCheckId))
    .innerJoin(instruments, eq(instruments.id, scans.instrumentId))
    .where(eq(scans.lotId, detail.lot.id));
  return rows.map(({ passed, ...row }) => ({ ...row, outcome: passed ? 'passed' : 'failed' }));
}

async function loadPlots(
  db: Executor,
  detail: LotDetail,
  results: Map<string, Decision>
): Promise<CertificatePlot[]> {
  const margin = (id: string) =>
    Math.min(...(results.get(id)?.criteria ?? []).map((criterion) => criterion.margin));
  const passes = detail.scans
    .filter((scan) => scan.verdict === 'pass')
    .sort((a, b) => margin(a.id) - margin(b.id));
  const chosen: { scan: LotDetail['scans'][number]; why: string }[] = detail.scans
    .filter((scan) => scan.verdict === 'fail')
    .map((scan) => ({ scan, why: 'did not pass' }));
  if (passes.length > 0) chosen.push({ scan: passes[0], why: 'pass closest to a limit' });
  if (passes.length > 2) chosen.push({ scan: passes[Math.floor(passes.length / 2)], why: 'typical pass' });
  const plots: CertificatePlot[] = [];
  for (const { scan, why } of chosen.slice(-MAX_PLOTS)) {
    const inputs = await loadDecisionInputs(db, scan.id);
    const view = inputs && evidenceOf(inputs.request);
    if (!view) continue;
    plots.push({
      title: `Container ${scan.containerNumber}, attempt ${scan.attempt}: ${why}`,
      gridCm1: Array.from(view.gridCm1),
      scan: Array.from(view.scan),
      mean: Array.from(view.mean),
      low: Array.from(view.low),
      high: Array.from(view.high)
    });
  }
  return plots;
}
