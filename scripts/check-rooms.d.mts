export const MAY_IMPORT: Record<string, string[]>;
export function importsOf(text: string): { name: string; type: boolean }[];
export function roomOf(path: string): string | null;
export function resolveImport(root: string, from: string, name: string): string | null;
export function checkRooms(root: string): string[];
