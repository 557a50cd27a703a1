import { describe, expect, it } from 'vitest';
import { expectConsole } from '../support/guards.js';

describe('the guards of the tests', () => {
  it('let noise pass that a test has announced', () => {
    expectConsole(/a car is missing/);
    console.error('a car is missing');
  });

  it.fails('fail a test for noise that it has not', () => {
    console.warn('a car is missing');
  });

  it.fails('fail a test that connects to another machine', async () => {
    await expect(fetch('http://192.0.2.1/')).rejects.toThrow();
  });
});
