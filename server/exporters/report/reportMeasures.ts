import type { ReportLanguage } from './reportTexts.ts';

/** Measures of fruit as a sentence names them, by language. */
export const reportMeasures: Record<ReportLanguage, Readonly<Record<string, string>>> = {
  en: { brix: '°Brix', ph: 'pH', ta: 'acidity', clusterWeight: 'cluster weight', clusterCount: 'clusters per vine' },
  es: { brix: '°Brix', ph: 'pH', ta: 'acidez', clusterWeight: 'peso del racimo', clusterCount: 'racimos por cepa' },
  fr: { brix: '°Brix', ph: 'pH', ta: 'acidité', clusterWeight: 'poids des grappes', clusterCount: 'grappes par cep' },
  it: { brix: '°Brix', ph: 'pH', ta: 'acidità', clusterWeight: 'peso del grappolo', clusterCount: 'grappoli per ceppo' },
  pt: { brix: '°Brix', ph: 'pH', ta: 'acidez', clusterWeight: 'peso do cacho', clusterCount: 'cachos por cepa' },
};
