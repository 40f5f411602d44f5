import { defineStore } from 'pinia';
import type { OpenSession, PasswordChange, ResetAnswer } from '../../shared/contracts/account.ts';
import { http } from '../lib/http.ts';

/** One's own account: password, and where one is signed in. */
export const useAccountStore = defineStore('account', () => {
  const sessions = async () => (await http.get<{ items: OpenSession[] }>('/api/account/sessions')).items;
  const endSession = (key: string) => http.delete(`/api/account/sessions/${key}`);
  const endOthers = () => http.delete<{ ended: number }>('/api/account/sessions');
  const changePassword = (change: PasswordChange) => http.put<{ ended: number }>('/api/account/password', change);
  const askForReset = (email: string) => http.post('/api/password-resets', { email });
  const readReset = (token: string) => http.get<{ email: string }>(`/api/password-resets/${encodeURIComponent(token)}`);
  const reset = (answer: ResetAnswer) => http.post('/api/password-resets/use', answer);
  return { sessions, endSession, endOthers, changePassword, askForReset, readReset, reset };
});
