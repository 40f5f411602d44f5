export interface Part { bytes: number; sha256: string }
export interface Manifest {
  createdAt: string;
  postgres: number;
  database: Part & { tables: Record<string, number> };
  files: (Part & { path: string })[];
}
export function isSafePath(path: string): boolean;
export function checkArchive(file: string): Promise<Manifest>;
