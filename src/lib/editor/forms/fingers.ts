import { fingerWords } from '$lib/player/fingers';
import { FINGERS } from '$lib/task/schema';

export { fingerWords };
export const fingerOptions = FINGERS.map((finger) => ({ value: finger, label: fingerWords(finger) }));
