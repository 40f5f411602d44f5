import { ImportProblem, naming } from '../importProblem.ts';
import type { ImportQuestion, ImportWarning, RasterUnderstood } from '../understood.ts';
import { describeOpen, type RasterReadOptions } from './describeRaster.ts';
import { findMaskBand } from './maskBand.ts';
import { previewOpen, type RasterPreview } from './previewRaster.ts';
import { checkValues, isScrambled } from './valueChecks.ts';
import { withRaster } from './withRaster.ts';

export interface RasterInspection {
  understood: RasterUnderstood;
  preview: RasterPreview;
}

/**
 * Tags and values together: what `describeRaster` says, plus what a look at the pixels adds. A value that looks like an
 * unmarked "missing" becomes a question. Throws ImportProblem, `no-values` when every pixel is missing.
 */
export function inspectRaster(input: string | Uint8Array, options: RasterReadOptions): Promise<RasterInspection> {
  return naming(options.fileName, () =>
    withRaster(input, options, async (raster, own) => {
      const described = describeOpen(raster, own);
      const preview = await previewOpen(raster, described, { noData: options.answers?.noData });
      const questions: ImportQuestion[] = [...described.questions];
      const warnings: ImportWarning[] = [...described.warnings];
      if (preview.bands.every(({ values }) => values.every(Number.isNaN))) {
        throw new ImportProblem({
          code: 'no-values',
          fact: raster.layout.format === 'float' ? 'It has no values: every pixel is marked as missing, is no number, or is larger than anything measured.' : 'It has no values: every pixel is marked as missing.',
          remedy: 'Check that it is the right file, and that its mark for missing values is right.',
          params: { why: 'all-missing' },
        });
      }
      requireSound(preview);
      const mask = findMaskBand(preview, described.bands, options.answers?.maskBand !== undefined);
      if (mask?.question) questions.push(mask.question);
      if (mask?.warning) warnings.push(mask.warning);
      for (const band of preview.bands.filter(({ index }) => index !== mask?.index)) {
        const found = checkValues(band, described.bands.find(({ index }) => index === band.index)!, { noDataAnswered: options.answers?.noData !== undefined, bands: preview.bands.length });
        questions.push(...found.questions);
        warnings.push(...found.warnings);
      }
      return { understood: { ...described, questions: onePerCode(questions), warnings }, preview };
    }),
  );
}

/** Numbers of no measure at all, such as floats whose bytes stand in another order than the file says. */
function requireSound({ bands }: RasterPreview): void {
  if (!bands.every(({ raw }) => isScrambled(raw))) return;
  throw new ImportProblem({
    code: 'damaged',
    fact: 'Its values jump from under 1e-12 to over 1e12, which nothing measured does: their bytes stand in another order than the file says.',
    remedy: 'Export it again, without a predictor or in little-endian order.',
    params: { why: 'scrambled' },
  });
}

/** Bands of one file share their mark for missing values: one question serves all. */
function onePerCode(questions: readonly ImportQuestion[]): ImportQuestion[] {
  return questions.filter((question, i) => questions.findIndex(({ code }) => code === question.code) === i);
}
