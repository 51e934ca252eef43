export default async (): Promise<never> => {
  throw new Error('The engine is not here yet.');
};
