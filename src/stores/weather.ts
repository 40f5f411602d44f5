import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { z } from 'zod';
import type { weatherDay, weatherFile, WeatherReading, WeatherView } from '../../shared/contracts/weather.ts';
import { http } from '../lib/http.ts';

/** Temperatures and rain of an estate, day by day. */
export const useWeatherStore = defineStore('weather', () => {
  const view = shallowRef<WeatherView | null>(null);
  const at = (estateId: string, path = '') => `/api/estates/${estateId}/weather${path}`;

  async function load(estateId: string): Promise<void> {
    view.value = await http.get<WeatherView>(at(estateId));
  }

  async function keep(estateId: string, day: z.input<typeof weatherDay>): Promise<void> {
    await http.put(at(estateId), day);
    await load(estateId);
  }

  async function forget(estateId: string, day: string): Promise<void> {
    await http.delete(at(estateId, `/${day}`));
    await load(estateId);
  }

  /** Reads a table back, or keeps it when `apply` is set. */
  async function read(estateId: string, file: z.input<typeof weatherFile>): Promise<WeatherReading> {
    const reading = await http.post<WeatherReading>(at(estateId, '/import'), file);
    if (file.apply === true) await load(estateId);
    return reading;
  }

  return { view, load, keep, forget, read };
});
