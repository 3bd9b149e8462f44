// Published recipe forms to begin from; the numbers and sources are those of app/chemistry/standard_recipes.py.

/** The numbers of a recipe: [name, label]. */
export const RECIPE_FIELDS = [
  ["sample_ml", "Sample, mL"], ["digestion_solution_ml", "Digestion solution, mL"], ["acid_reagent_ml", "Acid reagent, mL"],
  ["dichromate_g_per_l", "Potassium dichromate, g per litre of digestion solution"], ["mercury_sulfate_g_per_l", "Mercury sulfate, g per litre of digestion solution"],
  ["silver_sulfate_g_per_l", "Silver sulfate, g per litre of acid reagent"], ["wavelength_nm", "Wavelength, nm"],
  ["working_low", "Working range from, mg/L in the tube"], ["working_high", "Working range to, mg/L in the tube"],
  ["temperature_c", "Block temperature, °C"], ["minutes", "Digestion, minutes"],
];

const COMMON = { sample_ml: "2.5", digestion_solution_ml: "1.5", acid_reagent_ml: "3.5", silver_sulfate_g_per_l: "10.12", temperature_c: "150", minutes: "120" };

/** The forms, high range first. */
export const FORMS = [
  { name: "Standard Methods 5220 D, high range", source: "Standard Methods 5220 D", numbers: { ...COMMON, dichromate_g_per_l: "10.216", mercury_sulfate_g_per_l: "33.3", wavelength_nm: "600", working_low: "50", working_high: "900" } },
  { name: "Standard Methods 5220 D, low range", source: "Standard Methods 5220 D, from memory", numbers: { ...COMMON, dichromate_g_per_l: "1.022", mercury_sulfate_g_per_l: "33.3", wavelength_nm: "420", working_low: "5", working_high: "90" } },
  { name: "EPA 410.4, manual", source: "EPA 410.4 revision 2.0 (1993), 7.2 to 7.5 and 11.2", numbers: { ...COMMON, dichromate_g_per_l: "10.2", mercury_sulfate_g_per_l: "33.4", silver_sulfate_g_per_l: "9.897", wavelength_nm: "600", working_low: "20", working_high: "898" } },
];
