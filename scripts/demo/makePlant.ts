import { SUGGESTED_TOLERANCES } from '../../src/lib/domain/wavenumberStandards';
import { suggestDefinition } from '../../src/lib/identity/suggest';
import { recordPerformanceCheck } from '../../src/lib/server/commands/instruments';
import { createMaterial } from '../../src/lib/server/commands/materials';
import {
  approveMethodVersion,
  createMethodVersion,
  submitMethodVersion
} from '../../src/lib/server/commands/methods';
import { addReference, decideReference } from '../../src/lib/server/commands/references';
import type { Database } from '../../src/lib/server/db/client';
import {
  approvedSources,
  instruments,
  manufacturers,
  sites,
  suppliers,
  toleranceSets
} from '../../src/lib/server/db/schema';
import type { Act } from '../../src/lib/server/platform/act';
import { loadLabelledReferences } from '../../src/lib/server/queries/references';
import { makePeople } from './makePeople';
import { textFile } from './drumFile';
import { must } from './must';
import { readLiner, readMaterials, readPolystyrene, type DemoMaterial } from './materials';
import {
  DRIFT_CM1,
  INSTRUMENTS,
  MANUFACTURERS,
  PEOPLE,
  REFERENCE_INSTRUMENTS,
  SITE,
  sourceOf,
  SUPPLIERS
} from './scenario';
import { synthesise, toDelimitedText, toJcampDx } from './synthesise';

export interface Plant {
  readonly siteId: string;
  readonly acts: Readonly<Record<string, Act>>;
  readonly passwords: Readonly<Record<string, string>>;
  readonly instrumentIds: Readonly<Record<string, string>>;
  readonly supplierIds: Readonly<Record<string, string>>;
  readonly manufacturerIds: Readonly<Record<string, string>>;
  readonly materialIds: Readonly<Record<string, string>>;
}

const LOTS_PER_MATERIAL = 4;
const SCANS_PER_LOT = 3;
const OWNER = 'm.faria';
const APPROVER = 'q.sousa';

/** Site, people, sources, instruments with their checks, materials with references and effective methods. */
export async function makePlant(db: Database): Promise<Plant> {
  const [site] = await db
    .insert(sites)
    .values({ ...SITE, demo: true })
    .returning({ id: sites.id });
  const acts = await makePeople(db, site.id);
  const passwords = Object.fromEntries(PEOPLE.map((person) => [person.userName, person.password]));
  const supplierRows = await db.insert(suppliers).values(SUPPLIERS).returning();
  const manufacturerRows = await db.insert(manufacturers).values(MANUFACTURERS).returning();
  const byCode = (rows: { code: string; id: string }[]) =>
    Object.fromEntries(rows.map((row) => [row.code, row.id]));
  const instrumentIds = await makeInstruments(db, site.id, acts);
  const plant: Plant = {
    siteId: site.id,
    acts,
    passwords,
    instrumentIds,
    supplierIds: byCode(supplierRows),
    manufacturerIds: byCode(manufacturerRows),
    materialIds: {}
  };
  const materialIds: Record<string, string> = {};
  for (const material of readMaterials())
    materialIds[material.itemCode] = await makeMaterial(db, plant, material);
  return { ...plant, materialIds };
}

async function makeInstruments(
  db: Database,
  siteId: string,
  acts: Record<string, Act>
): Promise<Record<string, string>> {
  const sets = await db
    .insert(toleranceSets)
    .values(SUGGESTED_TOLERANCES.map((set) => ({ ...set, version: 1, bands: [...set.bands] })))
    .returning();
  const handheld = sets.find((set) => set.standard === 'polystyrene' && set.name === 'handheld');
  if (!handheld) throw new Error('there is no tolerance set for polystyrene');
  const ids: Record<string, string> = {};
  for (const instrument of INSTRUMENTS) {
    const [row] = await db
      .insert(instruments)
      .values({
        siteId,
        name: instrument.name,
        serial: instrument.serial,
        model: 'demo spectrometer',
        firmware: '1.0',
        excitationNm: instrument.excitationNm,
        rangeFromCm1: instrument.fromCm1,
        rangeToCm1: instrument.toCm1,
        resolutionCm1: instrument.resolutionCm1,
        location: instrument.location,
        nextQualificationOn: '2027-06-30'
      })
      .returning({ id: instruments.id });
    ids[instrument.name] = row.id;
    const shifts = instrument.name === 'RM-2' ? DRIFT_CM1 : [instrument.shiftCm1];
    for (const [i, shiftCm1] of shifts.entries()) {
      const spectrum = synthesise(
        readPolystyrene(),
        { ...instrument, shiftCm1 },
        {
          lotSeed: 'PS-04',
          scanSeed: `${instrument.name} check ${i}`,
          brightness: 40_000,
          fluorescence: 0.1,
          linerShare: 0
        }
      );
      const file = textFile(
        `${instrument.name}-polystyrene-${i + 1}.csv`,
        toDelimitedText(spectrum, instrument, 'polystyrene standard PS-04')
      );
      must(
        await recordPerformanceCheck(
          db,
          acts['o.reis'],
          { instrumentId: row.id, toleranceSetId: handheld.id, standardLot: 'PS-04' },
          file
        )
      );
    }
  }
  return ids;
}

async function makeMaterial(db: Database, plant: Plant, material: DemoMaterial): Promise<string> {
  const { state: _state, bands: _bands, fluorescence: _fluorescence, flags, ...fields } = material;
  const created = must(
    await createMaterial(db, plant.acts[OWNER], {
      ...fields,
      ...flags,
      suitabilityReason: fields.suitabilityReason ?? '',
      packaging: [...fields.packaging]
    })
  );
  const source = sourceOf(material.itemCode);
  await db.insert(approvedSources).values(
    source.suppliers.map((code) => ({
      materialId: created.id,
      supplierId: plant.supplierIds[code],
      manufacturerId: plant.manufacturerIds[source.manufacturer]
    }))
  );
  if (material.ramanSuitability !== 'suitable') return created.id;
  const referenceIds = await makeReferences(db, plant, material, created.id);
  // The first version of one method was built on two lots only; a third lot was rejected under it, so it was superseded.
  if (material.itemCode === 'LAC-M') {
    await makeMethod(db, plant, created.id, referenceIds.slice(0, 2 * SCANS_PER_LOT), 'First version');
    await makeMethod(
      db,
      plant,
      created.id,
      referenceIds,
      'A challenge with a third lot failed under version 1: two more lots added to the references'
    );
  } else await makeMethod(db, plant, created.id, referenceIds, 'First version');
  if (material.itemCode === 'IBU')
    await submitMethod(
      db,
      plant,
      created.id,
      referenceIds.slice(SCANS_PER_LOT),
      'Lot R1 is used up: built without it'
    );
  return created.id;
}

async function makeReferences(
  db: Database,
  plant: Plant,
  material: DemoMaterial,
  materialId: string
): Promise<string[]> {
  const ids: string[] = [];
  const owner = plant.acts[OWNER];
  for (let lot = 1; lot <= LOTS_PER_MATERIAL; lot++) {
    for (let scan = 1; scan <= SCANS_PER_LOT; scan++) {
      const instrument = REFERENCE_INSTRUMENTS[(lot + scan) % 2];
      const lotSeed = `${material.itemCode} reference lot ${lot}`;
      const spectrum = synthesise(material.bands, instrument, {
        lotSeed,
        scanSeed: `${lotSeed} scan ${scan}`,
        fluorescence: material.fluorescence,
        liner: readLiner(),
        linerShare: 0.01 * scan
      });
      const title = `${material.name}, reference lot R${lot}`;
      const file =
        lot % 2 === 0
          ? textFile(`${material.itemCode}-R${lot}-${scan}.jdx`, toJcampDx(spectrum, instrument, title))
          : textFile(
              `${material.itemCode}-R${lot}-${scan}.csv`,
              toDelimitedText(spectrum, instrument, title)
            );
      const added = must(
        await addReference(
          db,
          owner,
          {
            materialId,
            kind: 'lot_sample',
            sourceLot: `${material.itemCode}-R${lot}`,
            certificate: `CoA ${material.itemCode}-R${lot} (demo)`,
            independentIdentity: 'Infrared spectrum agrees (demo)',
            instrumentId: plant.instrumentIds[instrument.name],
            excitationNm: instrument.excitationNm
          },
          file
        )
      );
      must(await decideReference(db, owner, added.id, 'accepted', 'Provenance and quality checked'));
      ids.push(added.id);
    }
  }
  return ids;
}

async function makeMethod(
  db: Database,
  plant: Plant,
  materialId: string,
  referenceIds: string[],
  changeReason: string
): Promise<void> {
  const versionId = await submitMethod(db, plant, materialId, referenceIds, changeReason);
  must(
    await approveMethodVersion(db, plant.acts[APPROVER], {
      versionId,
      password: plant.passwords[APPROVER],
      reason: 'References, limits and cautions reviewed'
    })
  );
}

/** A method version signed by its author, in review. */
async function submitMethod(
  db: Database,
  plant: Plant,
  materialId: string,
  referenceIds: string[],
  changeReason: string
): Promise<string> {
  const definition = suggestDefinition(await loadLabelledReferences(db, referenceIds), 785);
  const owner = plant.acts[OWNER];
  const draft = must(
    await createMethodVersion(db, owner, {
      materialId,
      definition,
      intendedUse: 'Identity of incoming material through one layer of polyethylene liner',
      changeReason,
      referenceIds
    })
  );
  must(
    await submitMethodVersion(db, owner, {
      versionId: draft.id,
      password: plant.passwords[OWNER],
      reason: changeReason
    })
  );
  return draft.id;
}
