// The numbers of a recipe. Published forms to begin from come with the words of the server.

/** The numbers of a recipe: [name, label]. */
export const RECIPE_FIELDS = [
  ["sample_ml", "Sample, mL"], ["digestion_solution_ml", "Digestion solution, mL"], ["acid_reagent_ml", "Acid reagent, mL"],
  ["dichromate_g_per_l", "Potassium dichromate, g per litre of digestion solution"], ["mercury_sulfate_g_per_l", "Mercury sulfate, g per litre of digestion solution"],
  ["silver_sulfate_g_per_l", "Silver sulfate, g per litre of acid reagent"], ["wavelength_nm", "Wavelength, nm"],
  ["working_low", "Working range from, mg/L in the tube"], ["working_high", "Working range to, mg/L in the tube"],
  ["temperature_c", "Block temperature, °C"], ["minutes", "Digestion, minutes"],
];
