/** What a page lends to the frame around it: the line at the right of the header (the editor: what is saved). */
class Shell {
  status = $state<string | null>(null);
  level = $state<'calm' | 'warn'>('calm');

  say(status: string | null, level: 'calm' | 'warn' = 'calm') {
    this.status = status;
    this.level = level;
  }
}

export const shell = new Shell();
