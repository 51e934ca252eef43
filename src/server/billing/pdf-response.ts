/** A printed document as an HTTP answer. */

export interface PrintedFile {
  content: Buffer;
  filename: string;
}

export const pdfResponse = ({ content, filename }: PrintedFile): Response =>
  new Response(new Uint8Array(content), {
    headers: {
      'Content-Type': 'application/pdf',
      'Content-Length': String(content.length),
      'Content-Disposition': `attachment; filename="${filename.replaceAll(/[^A-Za-z0-9.-]/g, '_')}"`,
      'Cache-Control': 'private, no-store',
    },
  });
