export function refuseNewerData(url: string, folder: string): Promise<void>;
