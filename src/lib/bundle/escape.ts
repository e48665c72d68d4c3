/** Text into HTML and data into inline scripts, so that no name can end an element or start another. */

const ENTITIES: Record<string, string> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;'
};

/** For element content and quoted attributes. */
export const escapeHtml = (text: string): string => text.replace(/[&<>"']/g, (sign) => ENTITIES[sign]!);

/**
 * JSON that is safe inside `<script type="application/json">`: with every `<` written as an escape there is neither
 * `</script` nor `<!--` in it. U+2028 and U+2029 are escaped for readers that take the text as JavaScript.
 */
export const jsonForHtml = (value: unknown): string =>
  JSON.stringify(value)
    .replaceAll('<', '\\u003c')
    .replaceAll('\u2028', '\\u2028')
    .replaceAll('\u2029', '\\u2029');

/**
 * A classic script that is safe inside `<script>`. In JavaScript `<\/script` and `<\!--` mean the same within
 * strings, templates and regular expressions without the `u` flag, which is where they can stand.
 */
export const scriptForHtml = (code: string): string =>
  code.replace(/<\/(script)/gi, '<\\/$1').replace(/<!--/g, '<\\!--');
