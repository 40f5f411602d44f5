import type { WineType } from '../contracts/lots.ts';

/**
 * Colour of the grapes by the name of the variety: names in wide use, common knowledge of the trade. A name that is not
 * here tells no colour, and then nothing is said about it. Grey grapes are pressed like white ones and count as such.
 */
export type GrapeColour = 'white' | 'dark';

/** Words that settle it whatever the rest of the name is: Grenache blanc, Pinot noir. */
const whiteWords = wordsOf('blanc blanche blanca blanco bianco bianca branco branca weiss weisser white gris grigio grauer');
const darkWords = wordsOf('noir noire nero nera negra negre preta preto rosso rossa rouge red black blauer tinta tinto tintorera hamburg');

const whiteNames = wordsOf(`airen albana albarino aligote alvarinho antao arinto arneis assyrtiko bacchus bourboulenc catarratto chardonnay chasselas chenin
  clairette colombard cortese encruzado falanghina fiano friulano furmint garganega gewurztraminer glera godello greco grillo gutedel harslevelu
  inzolia kerner listan loureiro macabeo malvasia manseng marsanne muscadelle muscadet muscat moscatel moscato ortrugo palomino parellada
  pecorino picpoul pires rabigato ribolla riesling rivaner rkatsiteli rolle roussanne sauvignon savagnin scheurebe semillon silvaner solaris
  sylvaner thurgau torrontes traminer trebbiano treixadura ugni veltliner verdejo verdelho verdicchio verdil vermentino vernaccia vidal
  viognier viosinho viura weissburgunder welschriesling xarel ximenez zibibbo`);
const darkNames = wordsOf(`aglianico alfrocheiro alicante aragonez baga barbera blaufrankisch bobal bonarda cabernet carignan carignano carinena carmenere
  castelao cinsault cinsaut corvina counoise croatina dolcetto dornfelder durif freisa gamay garnacha graciano grenache grignolino jaen
  kadarka lagrein lambrusco laurent lemberger malbec mataro mazuelo mencia merlot meunier monastrell mondeuse montepulciano mourvedre
  nebbiolo negroamaro nerello pinotage portugieser primitivo refosco regent rondinella sagrantino sangiovese saperavi schiava shiraz sirah
  spatburgunder syrah tannat tempranillo teroldego touriga trincadeira trollinger verdot xinomavro zinfandel zweigelt`);

/** Null where the name tells nothing. Example: "Grenache blanc" → white, "Cabernet Sauvignon" → dark, "Field 7" → null. */
export function grapeColour(variety: string): GrapeColour | null {
  const words = [...wordsOf(variety)];
  // A dark name first: Cabernet Sauvignon has a white one in it.
  for (const [white, dark] of [[whiteWords, darkWords], [whiteNames, darkNames]] as const) {
    if (words.some((word) => dark.has(word))) return 'dark';
    if (words.some((word) => white.has(word))) return 'white';
  }
  return null;
}

/** Grapes of another colour than the wine is made of: white ones in red or rosé, dark ones in white. It may be meant. */
export function otherColour(variety: string, wine: WineType): GrapeColour | null {
  const colour = grapeColour(variety);
  return colour === null || colour === (wine === 'white' ? 'white' : 'dark') ? null : colour;
}

/** Words of a name in lower case, without accents. */
function wordsOf(text: string): Set<string> {
  return new Set(text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase().split(/[^a-z]+/).filter((word) => word !== ''));
}
