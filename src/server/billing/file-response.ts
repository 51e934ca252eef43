/** A document as an HTTP answer. */

export interface PrintedFile {
  content: Buffer;
  filename: string;
}

export const pdfResponse = (file: PrintedFile): Response => fileResponse(file, 'application/pdf');

export const fileResponse = ({ content, filename }: PrintedFile, contentType: string): Response =>
  new Response(new Uint8Array(content), {
    headers: {
      'Content-Type': contentType,
      'Content-Length': String(content.length),
      'Content-Disposition': `attachment; filename="${filename.replaceAll(/[^A-Za-z0-9.-]/g, '_')}"`,
      'Cache-Control': 'private, no-store',
    },
  });
