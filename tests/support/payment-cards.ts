/** Sample card numbers of the payment fake. */
export const cards = {
  accepted: '4242 4242 4242 4242',
  declined: '4000 0000 0000 0002',
  authentication: '4000 0025 0000 3155',
};
