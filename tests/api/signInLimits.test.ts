import { describe, expect, it } from 'vitest';
import { Person } from '../../server/models/Person.ts';
import { startTestApp, testPassword } from './support/testApp.ts';

describe('who may not even try', () => {
  it('slows down guessing: the try after the limit is refused even with the right password', async () => {
    const strict = await startTestApp({ SIGN_IN_TRIES: '3' });
    try {
      const { ownerEmail } = await strict.addEstate();
      const one = await strict.browser();
      for (let i = 0; i < 3; i++) expect((await one.signIn(ownerEmail, 'wrong')).status).toBe(401);
      expect((await one.signIn(ownerEmail, testPassword)).status).toBe(429);
    } finally {
      await strict.close();
    }
  });

  it('keeps demo people out where the demo is not asked for', async () => {
    const live = await startTestApp({ PATCHROW_DEMO: '0' });
    try {
      const { ownerEmail, ownerId } = await live.addEstate();
      await Person.query().findById(ownerId).patch({ isDemo: true });
      expect((await (await live.browser()).signIn(ownerEmail)).status).toBe(401);
    } finally {
      await live.close();
    }
  });
});
