/** Passwords: what everybody guesses first is refused, what nobody would is not. */
import { describe, expect, it } from 'vitest';
import { weaknessOfPassword } from './check-password.ts';

describe('weaknessOfPassword', () => {
  // Among the most frequent long passwords of published breaches (from memory).
  it.each([
    '123456789012',
    'passwordpassword',
    'password1234',
    'P@ssw0rd12345',
    'qwertyuiop123',
    'qwertyuiop[]',
    '1q2w3e4r5t6y',
    'iloveyou1234',
    'administrator',
    'welcome12345',
    'letmein123456',
    'qwerty123456789',
    'abcdefghijkl',
    'aaaaaaaaaaaa',
    'abcabcabcabc',
    'Sunshine2024!',
    'asdfghjkl;123',
    '1qaz2wsx3edc',
  ])('refuses %s', (password) => {
    expect(weaknessOfPassword(password)).not.toBeNull();
  });

  it.each([
    'seven quiet herons wade',
    'correct horse battery staple',
    'vK9#pQ2!xL7z',
    'mydogrexisgreat',
    'ñandú y 12 garzas',
  ])('accepts %s, without asking for classes of characters', (password) => {
    expect(weaknessOfPassword(password)).toBeNull();
  });

  it('counts characters, not bytes or UTF-16 units', () => {
    expect(weaknessOfPassword('🐟🐠🐡🦈🐬🐳')).toContain('12 characters');
  });

  it('refuses what stands around it: address, name, team, product', () => {
    const surroundings = { email: 'maren.tarn@tarnfell.example', names: ['Maren Tarn', 'Tarn & Fell Modelling'] };
    for (const password of ['marentarn2026', 'Tarnfell!2026', 'burette-burette', 'modelling1234'])
      expect(weaknessOfPassword(password, surroundings)).not.toBeNull();
    expect(weaknessOfPassword('marengo herons wade', surroundings)).toBeNull();
  });
});
