/** What a person must heed while scanning a material, from its flags. The site's own procedures come first. */
export function cautionsFor(material: {
  readonly dark: boolean;
  readonly energetic: boolean;
  readonly lightSensitive: boolean;
  readonly degEgHighRisk: boolean;
}): readonly string[] {
  const cautions = [
    "Laser light harms eyes and skin. Follow the site's laser safety rules; never look into the probe or point it at people."
  ];
  if (material.dark)
    cautions.push(
      'Dark powders heat up under the laser and may smoulder. Use the reduced power your procedure states.'
    );
  if (material.energetic)
    cautions.push(
      'This material can ignite or explode under a laser. Do not scan it unless your procedure allows it.'
    );
  if (material.lightSensitive)
    cautions.push(
      'This material is light-sensitive. Keep the exposure short and close the container at once.'
    );
  if (material.degEgHighRisk)
    cautions.push('Identity by Raman does not replace the ethylene and diethylene glycol limit test.');
  return cautions;
}
