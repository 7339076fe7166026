import { z } from 'zod';
import { isCasNumber, RAMAN_SUITABILITIES } from '../../domain/materials';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database } from '../db/client';
import { materials } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { recordTrail } from '../platform/trail';

export const newMaterialSchema = z.strictObject({
  itemCode: z
    .string()
    .trim()
    .regex(/^[A-Z0-9][A-Z0-9-]{1,19}$/, 'Use 2 to 20 capital letters, digits and hyphens'),
  name: z.string().trim().min(2, 'Enter the name').max(120),
  casNumber: z
    .union([
      z.literal(''),
      z.string().trim().refine(isCasNumber, 'The check digit of the CAS number does not fit')
    ])
    .transform((text) => text || null),
  grade: z.string().trim().max(120).default(''),
  ramanSuitability: z.enum(RAMAN_SUITABILITIES).default('suitable'),
  suitabilityReason: z.string().trim().max(300).default(''),
  dark: z.boolean().default(false),
  energetic: z.boolean().default(false),
  lightSensitive: z.boolean().default(false),
  degEgHighRisk: z.boolean().default(false),
  packaging: z.array(z.string().trim().min(1)).default([])
});

/** Adds a material. */
export async function createMaterial(
  db: Database,
  act: Act,
  input: z.output<typeof newMaterialSchema>
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'material.write'))
    return refuse('not-allowed', 'Adding materials is for method owners.');
  if (input.ramanSuitability !== 'suitable' && input.suitabilityReason === '') {
    return refuse('bad-input', 'Say why Raman does not suit this material.', {
      suitabilityReason: 'Say why Raman does not suit this material'
    });
  }
  return transact(db, async (tx) => {
    const [row] = await tx
      .insert(materials)
      .values({ ...input, suitabilityReason: input.suitabilityReason || null, createdBy: act.actor.id })
      .onConflictDoNothing({ target: materials.itemCode })
      .returning({ id: materials.id });
    if (!row)
      return refuse('already-exists', `Item code ${input.itemCode} is in use already.`, {
        itemCode: 'This item code is in use already'
      });
    await recordTrail(tx, act, {
      action: 'material.create',
      recordType: 'material',
      recordId: row.id,
      recordLabel: `Material ${input.itemCode} ${input.name}`,
      after: { ...input }
    });
    return done({ id: row.id });
  });
}
