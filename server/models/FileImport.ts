import type { ImportAnswers, ImportNote, ImportQuestion, OfferedOutline, UnderstoodFile } from '../../shared/contracts/imports.ts';
import { EstateModel } from './BaseModel.ts';

/** A file that came with another as part of it, kept byte for byte. */
export interface KeptPart {
  name: string;
  sha256: string;
  bytes: number;
}

/** What is remembered of a file between two answers, so that it need not be read again for each. */
export interface ImportMemory {
  file: UnderstoodFile | null;
  /** Questions that the reader had, answered ones too. */
  asked: ImportQuestion[];
  companions: { worldFileText: string | null; projectionFileText: string | null; /** The mask that came beside the picture, kept as files are. */ maskSha256?: string | null; parts?: KeptPart[] };
  outlines: OfferedOutline[];
}

export class FileImport extends EstateModel {
  static override tableName = 'imports';
  static override jsonAttributes = ['understood', 'answers', 'warnings', 'problem'];

  declare fileId: string | null;
  declare fileName: string;
  declare format: string;
  declare state: 'reading' | 'asks' | 'ready' | 'done' | 'refused';
  declare understood: ImportMemory;
  declare answers: ImportAnswers;
  declare warnings: ImportNote[];
  declare problem: ImportNote | null;
  declare retiredAt: Date | null;
  declare createdBy: string | null;
  declare createdAt: Date;
  declare finishedAt: Date | null;
}
