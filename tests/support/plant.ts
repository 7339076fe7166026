import { SUGGESTED_TOLERANCES } from '$lib/domain/wavenumberStandards';
import { suggestDefinition } from '$lib/identity/suggest';
import { registerDelivery } from '$lib/server/commands/deliveries';
import { recordPerformanceCheck } from '$lib/server/commands/instruments';
import { createMaterial } from '$lib/server/commands/materials';
import { approveMethodVersion, createMethodVersion, submitMethodVersion } from '$lib/server/commands/methods';
import { addReference, decideReference } from '$lib/server/commands/references';
import type { Database } from '$lib/server/db/client';
import { approvedSources, instruments, manufacturers, suppliers, toleranceSets } from '$lib/server/db/schema';
import { siteToday } from '$lib/server/queries/clock';
import { listContainers } from '$lib/server/queries/containers';
import { loadLabelledReferences } from '$lib/server/queries/references';
import { must } from '../../scripts/demo/must';
import { readLiner, readMaterials, readPolystyrene } from '../../scripts/demo/materials';
import { INSTRUMENTS } from '../../scripts/demo/scenario';
import { synthesise, toDelimitedText, toJcampDx, type SynthesisOptions } from '../../scripts/demo/synthesise';
import { PASSWORD, type Fixtures } from './fixtures';

export const textFile = (fileName: string, text: string) => ({
  fileName,
  mediaType: 'text/plain',
  bytes: new TextEncoder().encode(text)
});
export type ReferenceFile = ReturnType<typeof textFile>;

const [RM1] = INSTRUMENTS;

/** A made spectrum of a demo material on the test instrument, as a file. */
export function spectrumFile(
  itemCode: string,
  scanSeed: string,
  options: Partial<SynthesisOptions> & { jcamp?: boolean; fileName?: string } = {}
): ReferenceFile {
  const material = readMaterials().find((row) => row.itemCode === itemCode);
  if (!material) throw new Error(`no material ${itemCode}`);
  const { jcamp = false, fileName = `${itemCode}-${scanSeed}.${jcamp ? 'jdx' : 'csv'}`, ...more } = options;
  const spectrum = synthesise(material.bands, RM1, {
    // A lot that the references know: these tests are of rules, not of error rates.
    lotSeed: `${itemCode} reference lot 2`,
    scanSeed,
    fluorescence: material.fluorescence,
    liner: readLiner(),
    ...more
  });
  return textFile(fileName, (jcamp ? toJcampDx : toDelimitedText)(spectrum, RM1, scanSeed));
}

export interface TestPlant {
  readonly instrumentId: string;
  /** An instrument that was never checked. */
  readonly uncheckedId: string;
  readonly supplierId: string;
  readonly manufacturerId: string;
  /** Adds a material with an effective method built from these files; each file is a lot of its own. */
  addMaterial(
    itemCode: string,
    files: readonly ReferenceFile[],
    more?: { degEgHighRisk?: boolean; name?: string }
  ): Promise<string>;
  /** A material of the demo, with made references. */
  addDemoMaterial(itemCode: string): Promise<string>;
  registerLot(
    materialId: string,
    containers: number
  ): Promise<{
    lotId: string;
    lotNumber: string;
    deliveryId: string;
    barcodes: string[];
    containerIds: string[];
  }>;
}

let notes = 0;

/** Suppliers, a checked instrument, and ways to add materials with methods and lots. */
export async function makeTestPlant(db: Database, { siteId, people }: Fixtures): Promise<TestPlant> {
  const [supplier] = await db
    .insert(suppliers)
    .values({ code: 'S1', name: 'Skerry Fine Substances' })
    .returning();
  const [manufacturer] = await db
    .insert(manufacturers)
    .values({ code: 'M1', name: 'Saltmarsh Sugars' })
    .returning();
  const fields = {
    siteId,
    excitationNm: 785,
    rangeFromCm1: 180,
    rangeToCm1: 2050,
    resolutionCm1: 6,
    location: 'dock'
  };
  const [instrument] = await db
    .insert(instruments)
    .values({ ...fields, name: 'RM-1', serial: RM1.serial })
    .returning();
  const [unchecked] = await db
    .insert(instruments)
    .values({ ...fields, name: 'RM-9', serial: 'WF-785-0999' })
    .returning();
  const [set] = await db
    .insert(toleranceSets)
    .values(
      SUGGESTED_TOLERANCES.filter((row) => row.name === 'handheld').map((row) => ({
        ...row,
        version: 1,
        bands: [...row.bands]
      }))
    )
    .returning();
  const polystyrene = synthesise(readPolystyrene(), RM1, {
    lotSeed: 'PS',
    scanSeed: 'check',
    brightness: 40_000,
    fluorescence: 0.1,
    linerShare: 0
  });
  const check = must(
    await recordPerformanceCheck(
      db,
      people.operator.act,
      { instrumentId: instrument.id, toleranceSetId: set.id, standardLot: 'PS' },
      textFile('ps.csv', toDelimitedText(polystyrene, RM1, 'polystyrene'))
    )
  );
  if (!check.result.passed) throw new Error('the test instrument did not pass its check');

  const addMaterial: TestPlant['addMaterial'] = async (itemCode, files, more = {}) => {
    const owner = people.method_owner.act;
    const { id } = must(
      await createMaterial(db, owner, {
        itemCode,
        name: more.name ?? `Material ${itemCode}`,
        casNumber: null,
        grade: '',
        ramanSuitability: 'suitable',
        suitabilityReason: '',
        dark: false,
        energetic: false,
        lightSensitive: false,
        degEgHighRisk: more.degEgHighRisk ?? false,
        packaging: []
      })
    );
    await db
      .insert(approvedSources)
      .values({ materialId: id, supplierId: supplier.id, manufacturerId: manufacturer.id });
    const referenceIds: string[] = [];
    for (const [i, file] of files.entries()) {
      const added = must(
        await addReference(
          db,
          owner,
          {
            materialId: id,
            kind: 'lot_sample',
            sourceLot: `lot ${i + 1}`,
            certificate: 'test',
            independentIdentity: 'test',
            instrumentId: instrument.id,
            excitationNm: 785
          },
          file
        )
      );
      must(await decideReference(db, owner, added.id, 'accepted', 'for a test'));
      referenceIds.push(added.id);
    }
    const definition = suggestDefinition(await loadLabelledReferences(db, referenceIds), 785);
    const draft = must(
      await createMethodVersion(db, owner, {
        materialId: id,
        definition,
        intendedUse: 'test',
        changeReason: '',
        referenceIds
      })
    );
    must(await submitMethodVersion(db, owner, { versionId: draft.id, password: PASSWORD, reason: 'test' }));
    must(
      await approveMethodVersion(db, people.approver.act, {
        versionId: draft.id,
        password: PASSWORD,
        reason: 'for a test'
      })
    );
    return id;
  };

  return {
    instrumentId: instrument.id,
    uncheckedId: unchecked.id,
    supplierId: supplier.id,
    manufacturerId: manufacturer.id,
    addMaterial,
    addDemoMaterial: (itemCode) => {
      const name = readMaterials().find((row) => row.itemCode === itemCode)?.name;
      const files = [1, 2, 3, 4, 5, 6].flatMap((lot) =>
        [1, 2].map((scan) =>
          spectrumFile(itemCode, `reference ${lot} ${scan}`, {
            lotSeed: `${itemCode} reference lot ${lot}`,
            linerShare: 0.01 * scan
          })
        )
      );
      return addMaterial(itemCode, files, { name });
    },
    registerLot: async (materialId, containerCount) => {
      notes += 1;
      const delivery = must(
        await registerDelivery(db, people.operator.act, {
          deliveryNote: `note ${notes}`,
          supplierId: supplier.id,
          carrier: '',
          condition: '',
          arrivedOn: await siteToday(db, 'UTC'),
          lots: [
            {
              materialId,
              manufacturerId: manufacturer.id,
              manufacturerBatch: `B-${notes}`,
              expiresOn: '2099-12-31',
              retestOn: null,
              containerCount,
              packaging: 'drum',
              samplingPlan: 'every_container',
              samplingReason: ''
            }
          ]
        })
      );
      const [lot] = delivery.lots;
      const rows = await listContainers(db, lot.id);
      return {
        lotId: lot.id,
        lotNumber: lot.lotNumber,
        deliveryId: delivery.id,
        barcodes: rows.map((row) => row.barcode),
        containerIds: rows.map((row) => row.id)
      };
    }
  };
}

/** The form that an instrument's PC or the scan bay posts to the scans API. */
export function scanForm(fields: Record<string, string>, file: ReferenceFile | null): FormData {
  const form = new FormData();
  for (const [name, value] of Object.entries(fields)) form.set(name, value);
  if (file)
    form.set('file', new File([Uint8Array.from(file.bytes)], file.fileName, { type: file.mediaType }));
  return form;
}
