/** A file as an answer. The name is plain ASCII by construction, or is given percent-encoded beside it. */
export function download(body: string | Uint8Array, media: string, name: string): Response {
  const plain = name.replace(/[^A-Za-z0-9._-]+/g, '_');
  return new Response(typeof body === 'string' ? body : new Uint8Array(body), {
    headers: {
      'content-type': media,
      'content-disposition': `attachment; filename="${plain}"; filename*=UTF-8''${encodeURIComponent(name)}`,
      'cache-control': 'no-store',
      'x-content-type-options': 'nosniff'
    }
  });
}
