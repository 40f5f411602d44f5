export function newestWithPostgis(packageNames: string[]): number | null;
export function installCommand(packages: string[]): string;
