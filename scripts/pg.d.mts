/** Types of pg.mjs for the tests and the application's own tools. */
export interface Database {
  /** Connection address of the role `ebbline_app`, for the application. */
  url: string;
  /** Connection address of the role `ebbline_owner`, for migrations. */
  ownerUrl: string;
  port: number;
  started: boolean;
  /** Ends the server if this process started it; says whether it did. */
  stop(): boolean;
}
export const DATABASE: string;
export const OWNER: string;
export const APP: string;
export const QUEUE_SCHEMA: string;
export function dataFolder(): string;
export function freePort(): Promise<number>;
export function isPortFree(port: number, host?: string): Promise<boolean>;
export function checkDataOwner(folder?: string): void;
export function startDatabase(options?: { folder?: string; quick?: boolean }): Promise<Database>;
export function startTestDatabase(): Promise<Database & { folder: string }>;
export function stopDatabase(folder?: string): boolean;
