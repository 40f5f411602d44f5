import { plainText } from './cells.ts';
import { isForeignUnit } from './foreignUnits.ts';
import type { LabMeasure } from './labFile.ts';

/** What a column holds by its title. `unit: null` of a measure with several units means that the title does not say. */
export type ColumnRole =
  | { readonly kind: 'measure'; readonly measure: string; readonly unit: string | null }
  /** `foreign`: a measure of ours in a unit that is not read here. */
  | { readonly kind: 'code' | 'date' | 'temperature' | 'ignored' | 'foreign' | 'unknown' | 'unit' | 'value' };

interface TitleRow {
  readonly pattern: RegExp;
  readonly role: (title: string) => ColumnRole;
}

const ignored: ColumnRole = { kind: 'ignored' };
const of = (measure: string, unit: string | null): ColumnRole => ({ kind: 'measure', measure, unit });
/** A weight in kilograms or grams, as the title says. */
const weighed = (measure: string, kg: string, g: string) => (title: string) => of(measure, /\bkg\b|kilo/.test(title) ? kg : /\bg\b|\bgr\b|gram/.test(title) ? g : null);

const cluster = '(?:cluster|bunch|grappe|racim|grappol|cacho)';
const berry = '(?:berr|bai[ea]|baya|acin|bago|beeren)';
const counted = '(?:\\bn\\b|\\bno\\b|\\bnr\\b|\\bnum|number|count|compt|cont|nombre|zahl|#)';
const weight = '(?:weight|poids|peso|mass|gewicht|\\bk?g\\b|\\bgr\\b|gram)';
const either = (one: string, other: string) => new RegExp(`${one}.*${other}|${other}.*${one}`);

/**
 * Words of five languages, in the order of trying: what looks alike but is not wanted comes first. Titles are compared
 * without accents, in small letters.
 */
const rows: readonly TitleRow[] = [
  { pattern: /volat|\b[av]v\b|\bva\b|lacti|latti|acetic|gluconi|citri|potass|sulfit|\bso2\b|folin|\bipt\b|antho|antoc|tannin|colou?r|coul|turbid/, role: () => ignored },
  { pattern: /alcoh|alcool|\btav|\bavp\b|% ?vol|grado prob|degre prob|gradazione/, role: () => ignored },
  { pattern: /^(n(o|r|°)?\.? ?)?(rep|repl|replicate|repetition|repeticion|ripetizione|repeticao|replica|wdh|wiederholung)(\.|s| n(o|r|°)?\.?)?$/, role: () => ignored },
  { pattern: /comment|remark|observ|note|nota|osserv|obs\b/, role: () => ignored },
  // Parts of the nitrogen that yeast can use: neither is the sum, and ammonium is often told as NH4 and not as nitrogen.
  { pattern: /^(?!.*(assimil|asimil|\byan\b|\bnfa\b|\bapa\b|\bnaf\b|total|sum)).*(ammoni|amoni|\bnh ?[34]|\bpan\b|\bfan\b|\bnopa\b|amino|\bamine\b|aminico|amminic)/, role: () => ignored },
  // Grams a kilogram is no unit of ours, and near enough to grams a litre to be taken for it.
  { pattern: /(sugar|sucre|azucar|zuccher|acucar|zucker|solid|solub).*g ?\/ ?kg/, role: () => ignored },
  { pattern: /brix|°bx|\bbx\b/, role: () => of('brix', 'brix') },
  { pattern: /baume|^be$|°be|\bbe\b/, role: () => of('brix', 'baume') },
  { pattern: /\bkmw\b|klosterneub|\bbabo\b/, role: () => of('brix', 'kmw') },
  { pattern: /oechsle|ochsle|°oe|\boe\b/, role: () => of('brix', 'oechsle') },
  { pattern: /\bsg\b|s\.g\.|\bd20|densi|dichte|masse vol|massa vol|peso espec|peso spec|specific grav|gravity/, role: () => of('brix', 'gravity') },
  { pattern: /sugar|sucre|azucar|zuccher|acucar|zucker|mostgew|\bsst\b|\btss\b|glucos|fructos|soluble sol|solidos|solidi sol/, role: () => of('brix', null) },
  // Acidity told as malic acid is not malic acid.
  { pattern: /(\bta\b|\batt?\b|(total|titr)\w* acid|acid\w* (total|titr)|gesamts).*(mali|apfels)|acid\w*.*\b(as|en|in|als|come|como|expr\w*|eq\w*)\b.*(mali|apfels)/, role: () => ({ kind: 'foreign' }) },
  { pattern: /mali[ckqe]|malico|apfels/, role: (title) => of('malic', /mg ?\/? ?l/.test(title) ? 'malicMgPerL' : 'malicGPerL') },
  { pattern: /\byan\b|assimil|asimil|nitrogen|azote|azoto|nitrogeno|\bnfa\b|\bapa\b|\bnaf\b/, role: (title) => of('yan', /(^|[^m])g ?\/ ?l/.test(title) ? 'gNPerL' : 'mgNPerL') },
  { pattern: /\bph\b/, role: () => of('ph', null) },
  { pattern: /sulph|sulf|solfor|h2so4|so4h2/, role: () => of('ta', 'sulphuricGPerL') },
  { pattern: /m(illi)?eq/, role: () => of('ta', 'meqPerL') },
  { pattern: /mmol/, role: () => of('ta', 'mmolPerL') },
  { pattern: /(tartar|tartri|weins|h2t|acid|saure|\bta\b|\bat\b).*(g ?\/ ?(100 ?ml|dl)\b)/, role: () => of('ta', 'tartaricGPer100mL') },
  // The acid itself, measured apart, or the scale of all acids: only a person can say.
  { pattern: /^(l ?(\(\+\))?[- ] ?)?(tartaric acid|(acide?|ac\.?) tartri\w*|(acido|ac\.?) tartari\w*|weinsaure)( ?[([].*| m?g ?\/ ?l)?$/, role: () => ({ kind: 'unknown' }) },
  { pattern: /tartar|tartri|\btart\b|weins|h2t|c4h6o6/, role: () => of('ta', 'tartaricGPerL') },
  { pattern: /acid|acidez|saure|\bta\b|\bat\b|\batt\b|\bact\b/, role: () => of('ta', null) },
  { pattern: /\bdate|fecha|\bdata\b|datum|\bdia\b|\bjour\b|^(analy[sz]ed|reported|collected|sampled|received)( on| at)?$/, role: () => ({ kind: 'date' }) },
  { pattern: either(cluster, weight), role: weighed('clusterWeight', 'kgPerCluster', 'gPerCluster') },
  { pattern: new RegExp(`${berry}\\w* ?(/|per|par|por|pro|a|al|je) ?(l\\W)?${cluster}`), role: () => of('berriesPerCluster', null) },
  { pattern: new RegExp(`${either(cluster, counted).source}|^${cluster}\\w*( ?(/|per|par|por|pro|a) ?(\\w+))?$`), role: () => of('clusterCount', null) },
  { pattern: /prun|\btaille|sarment|\bpoda\b|potatur|schnittholz/, role: weighed('pruningWeight', 'kgPruned', 'gPruned') },
  { pattern: /yield|rendement|rendimiento|\bresa\b|produzion|produccion|producao|rendimento|ertrag|\bk?g ?(\/|per|par|por|a) ?(vine|cep|souche|cepa|vite|ceppo|videira|stock)/, role: weighed('yieldPerVine', 'kgPicked', 'gPicked') },
  { pattern: /\brot\b|botryt|pourrit|podred|podrid|marciume/, role: () => of('rotShare', null) },
  { pattern: either(berry, weight), role: (title) => of('berryWeight', /100/.test(title) ? 'gPer100Berries' : 'gPerBerry') },
  { pattern: /\b(year|vintage|season|annee|millesime|ano|anada|anno|annata|safra|campana|time|heure|hora|ora|zon[ea]s?|altitud\w*|elevation|hdop|accuracy|weather)\b/, role: () => ignored },
  { pattern: /temp|^t ?°|°[cf]\b|fahrenheit/, role: () => ({ kind: 'temperature' }) },
  { pattern: /label|etiq|etich|bag\b|sample|echant|muestra|campion|amostra|probe|code|codigo|codice|\bref|\bid\b|\bno\b|\bn°/, role: () => ({ kind: 'code' }) },
  { pattern: /^(unit|unite|unidad|unita|unidade|einheit)s?$/, role: () => ({ kind: 'unit' }) },
  { pattern: /^(value|result|resultat|resultado|risultato|valeur|valor|valore|wert|ergebnis|messwert)s?e?$/, role: () => ({ kind: 'value' }) },
];

/** An acidity is titrated to an end point: "TA (g/L, pH 8.2)" is no pH. */
const endpoint = /^(.*(?:acid|saure|titr|\bta\b|\batt?\b).*?)((?:to|at|bis|a|jusqu'a)? ?\bph ?[=:]? ?[78](?:[.,]\d)?(?!\d))(.*)$/;

/** Example: "Acidité totale (g/L H2SO4)" → titratable acidity as sulphuric; "Acidez total" → titratable acidity, scale not told. */
export function roleOfTitle(title: string, measures: readonly LabMeasure[]): ColumnRole {
  const plain = plainText(title).replace(endpoint, '$1$3');
  if (plain === '') return { kind: 'unknown' };
  const own = measures.find(({ name }) => name !== '' && plain.includes(plainText(name)));
  if (own) return of(own.code, null);
  const found = rows.find(({ pattern }) => pattern.test(plain))?.role(plain) ?? { kind: 'unknown' };
  if (found.kind === 'measure' && isForeignUnit(plain, found.measure)) return { kind: 'foreign' };
  return found.kind === 'measure' && !measures.some(({ code }) => code === found.measure) ? ignored : found;
}

/** A title that says that its temperatures are in degrees Fahrenheit. */
export function isFahrenheit(title: string): boolean {
  return /° ?f\b|\bf\b|fahrenheit/.test(plainText(title));
}

/** The unit written beside a figure, where it says more than the usual "g/L": "4,5 g/L H2SO4" → sulphuric. Null where it does not tell. */
export function unitInCell(word: string, measure: string): string | null {
  if (word.trim() === '') return null;
  const told = unitOfWord(word, measure);
  if (told !== null || !/\bm?g ?\/ ?l\b/.test(plainText(word)) || !['malic', 'yan'].includes(measure)) return told;
  return unitOfWord(`${measure} ${word}`, measure);
}

/** Unit words that stand alone, in a row of units or a column of units. */
export function unitOfWord(word: string, measure: string): string | null {
  // Alone, the name of the acid is asked about; beside an acidity it is its scale.
  const role = roleOfTitle(measure === 'ta' ? `ta ${word}` : word, [{ code: measure, name: '', unit: '', decimals: 0, minimum: 0, maximum: 0 }]);
  return role.kind === 'measure' && role.measure === measure ? role.unit : null;
}
