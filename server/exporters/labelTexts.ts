/** Words of bag labels by language. */
export const labelTexts = {
  en: { zone: 'Zone', row: 'Row', vine: 'Vine', stop: 'Stop', wholeZone: 'Whole zone, from stop', block: 'Block', date: 'Date' },
  es: { zone: 'Zona', row: 'Hilera', vine: 'Cepa', stop: 'Parada', wholeZone: 'Toda la zona, desde la parada', block: 'Parcela', date: 'Fecha' },
  fr: { zone: 'Zone', row: 'Rang', vine: 'Cep', stop: 'Arrêt', wholeZone: 'Toute la zone, dès l’arrêt', block: 'Parcelle', date: 'Date' },
  it: { zone: 'Zona', row: 'Filare', vine: 'Ceppo', stop: 'Tappa', wholeZone: 'Tutta la zona, dalla tappa', block: 'Appezzamento', date: 'Data' },
  pt: { zone: 'Zona', row: 'Bardo', vine: 'Cepa', stop: 'Paragem', wholeZone: 'Toda a zona, desde a paragem', block: 'Parcela', date: 'Data' },
} as const;

export type LabelLanguage = keyof typeof labelTexts;
