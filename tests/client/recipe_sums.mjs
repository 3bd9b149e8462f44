// The form's preview of a recipe; reads a list of recipes and writes capacity and doubts as JSON.

import { readFileSync } from "node:fs";
import { capacityOf, doubts } from "../../static/bench/recipe_sums.js";

const recipes = JSON.parse(readFileSync(0, "utf8"));
console.log(JSON.stringify(recipes.map((recipe) => ({ capacity: capacityOf(recipe), doubts: doubts(recipe).length }))));
