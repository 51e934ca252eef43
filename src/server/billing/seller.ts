/** The seller as configured. */
import type { Party } from '@/domain/billing/invoice-face.ts';
import { env } from '../env.ts';

export function seller(): Party {
  const { SELLER_NAME, SELLER_ADDRESS, SELLER_COUNTRY, SELLER_VAT_NUMBER } = env();
  return {
    name: SELLER_NAME,
    // A shell's environment carries newlines as \n.
    address: SELLER_ADDRESS.replaceAll('\\n', '\n'),
    country: SELLER_COUNTRY,
    vatNumber: SELLER_VAT_NUMBER || null,
  };
}
