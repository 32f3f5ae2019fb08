type Part = string | { label: string; href: string };

/** The same paragraphs as plain text and as simple HTML; a link stands alone on its line. */
export function layOut(parts: Part[]): { text: string; html: string } {
  const text = parts
    .map((part) => (typeof part === 'string' ? part : `${part.label}:\n${part.href}`))
    .concat('Nullwright')
    .join('\n\n');
  const paragraphs = parts.map((part) =>
    typeof part === 'string'
      ? `<p>${escapeHtml(part)}</p>`
      : `<p><a href="${escapeHtml(part.href)}">${escapeHtml(part.label)}</a></p>`,
  );
  const html = `<!doctype html><html lang="en"><body style="font-family:sans-serif;color:#16191d">${paragraphs.join('')}<p>Nullwright</p></body></html>`;
  return { text: `${text}\n`, html };
}

function escapeHtml(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;');
}
