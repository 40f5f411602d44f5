/**
 * What to do with a datum that a file names but does not describe: old ones are brought to WGS 84 by the parameters in
 * common use (EPSG Geodetic Parameter Dataset; how well they fit: shared/geo/datumAccuracy.ts), modern ones are taken as WGS 84.
 */

/** Text for proj4 of a datum by its name in any of the usual spellings; null when the name is not known. */
export function datumShift(name: string): string | null {
  const plain = plainName(name);
  const old = oldDatums.find(([names]) => names.includes(plain));
  if (old !== undefined) return `+towgs84=${old[1]}`;
  return modernDatums.test(plain) ? '' : null;
}

/** Both ellipsoids of modern datums: GRS 80 and WGS 84 differ by a tenth of a millimetre. */
export function isModernEllipsoid(a: number, inverseFlattening: number): boolean {
  return Math.abs(a - 6378137) < 0.01 && Math.abs(inverseFlattening - 298.2572) < 0.0001;
}

/** This one needs a correction grid that does not ship with the program. */
export function needsCorrectionGrid(name: string): boolean {
  return ['northamerican1927', 'northamericandatum1927', 'nad27'].includes(plainName(name));
}

function plainName(name: string): string {
  return name.toLowerCase().replace(/^d_/, '').replace(/[^a-z0-9+]/g, '');
}

const modernDatums = /^(wgs84|wgs1984|worldgeodeticsystem1984|.*northamerican(datum)?1983|nad83|nad1983|etrs|europeanterrestrial|rgf93|rgf1993|reseaugeodesiquefrancais|gda(94|1994|2020)|geocentricdatumofaustralia|nzgd2000|newzealandgeodeticdatum2000|sirgas|sistemadereferencia|posgar|hartebeesthoek|rdn2008|retedinamicanazionale|igm95|istitutogeograficomilita|jgd|japanesegeodetic|china2000|cgcs2000|itrf|irenet95|slovenia(geodeticdatum)?1996|croatianterrestrial|htrs96|regcan|redgeodesicadecanarias|swissterrestrial|chtrf|magna|marcogeocentrico|mexico|lithuania1994|latvia1992|estonia1997|sweref|euref|serbianreference|turkishnational|moldref|portugal)/;

const oldDatums: readonly (readonly [names: readonly string[], towgs84: string])[] = [
  [['osgb36', 'osgb1936', 'ordnancesurveyofgreatbritain1936'], '446.448,-125.157,542.06,0.15,0.247,0.842,-20.489'],
  [['amersfoort'], '565.4171,50.3319,465.5524,-0.398957,0.343988,-1.8774,4.0725'],
  [['rnb72', 'belge1972', 'reseaunationalbelge1972'], '-106.8686,52.2978,-103.7239,0.3366,-0.457,1.8422,-1.2747'],
  [['ntf', 'nouvelletriangulationfrancaise', 'nouvelletriangulationfrancaiseparis'], '-168,-60,320,0,0,0,0'],
  [['europeandatum1950', 'european1950', 'ed50'], '-87,-98,-121,0,0,0,0'],
  [['montemario', 'montemariorome', 'rome1940'], '-104.1,-49.1,-9.9,0.971,-2.917,0.714,-11.68'],
  [['ch1903', 'ch1903+'], '674.374,15.056,405.346,0,0,0,0'],
  [['potsdam', 'deutscheshauptdreiecksnetz', 'dhdn'], '598.1,73.7,418.2,0.202,0.045,-2.455,6.7'],
  [['mgi', 'militargeographischeinstitut', 'militargeographischesinstitut', 'hermannskogel'], '577.326,90.129,463.919,5.137,1.474,5.297,2.4232'],
  [['mgi1901'], '682,-203,480,0,0,0,0'],
  [['sjtsk', 'systemoftheunifiedtrigonometricalcadastralnetwork', 'systemjednotnetrigonometrickesitekatastralni'], '570.8,85.7,462.8,4.998,1.587,5.261,3.56'],
  [['ggrs87', 'ggrs1987', 'greekgeodeticreferencesystem1987'], '-199.87,74.79,246.62,0,0,0,0'],
  [['lisbon', 'lisbon1937', 'lisbonlisbon', 'lisbon1937lisbon'], '-304.046,-60.576,103.64,0,0,0,0'],
  [['datum73'], '-223.237,110.193,36.649,0,0,0,0'],
  [['hd72', 'hungarian1972', 'hungariandatum1972'], '52.17,-71.82,-14.9,0,0,0,0'],
  [['pulkovo194258', 'pulkovo1942adj1958', 'dealulpiscului1970'], '33.4,-146.6,-76.3,-0.359,-0.053,0.844,-0.84'],
  [['pulkovo1942'], '23.92,-141.27,-80.9,0,0.35,0.82,-0.12'],
  [['ire65', 'tm65', 'tm75', 'geodeticdatumof1965', 'ireland1965'], '482.5,-130.6,564.6,-1.042,-0.214,-0.631,8.15'],
  [['luref', 'luxembourg1930', 'luxembourgreferenceframe'], '-189.6806,18.3463,-42.7695,-0.33746,-3.09264,2.53861,0.4598'],
  [['isr93', 'israel', 'israel1993'], '-48,55,52,0,0,0,0'],
  [['palestine1923'], '-275.7224,94.7824,340.8944,-8.001,-4.42,-11.821,1'],
  [['d48', 'slovenia1948'], '426.9,142.6,460.1,4.91,4.49,-12.42,17.1'],
  [['sad69', 'southamerican1969', 'southamericandatum1969', 'southamerican196996', 'southamericandatum196996'], '-67.35,3.88,-38.22,0,0,0,0'],
  [['psad56', 'provisionalsouthamerican1956', 'provisionalsouthamericandatum1956', 'provisionalsamerican1956'], '-288,175,-376,0,0,0,0'],
  [['campoinchauspe'], '-148,136,90,0,0,0,0'],
  [['agd66', 'australian1966', 'australiangeodeticdatum1966'], '-117.808,-51.536,137.784,0.303,0.446,0.234,-0.29'],
  [['agd84', 'australian1984', 'australiangeodeticdatum1984'], '-134,-48,149,0,0,0,0'],
  [['nzgd49', 'newzealand1949', 'newzealandgeodeticdatum1949'], '59.47,-5.04,187.44,0.47,-0.1,1.024,-4.5993'],
  [['cape'], '-136,-108,-292,0,0,0,0'],
  [['wgs72', 'wgs1972', 'worldgeodeticsystem1972'], '0,0,4.5,0,0,0.554,0.2263'],
];
