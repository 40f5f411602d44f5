import { Router } from 'express';
import { z } from 'zod';
import { isoDate } from '../../shared/contracts/common.ts';
import { weatherDay, weatherFile } from '../../shared/contracts/weather.ts';
import { accessOf, allow } from '../access/guard.ts';
import { todayOf } from '../services/estates.ts';
import { forgetWeather, importWeather, listWeather, typeWeather } from '../services/weather/weather.ts';

/** Temperatures and rain by day, typed or from a station's table. */
export function weatherRoutes(): Router {
  const router = Router({ mergeParams: true });
  router.get('/weather', allow('results.see', 'read'), async (request, response) => {
    response.json(await listWeather(accessOf(request), { today: await todayOf(accessOf(request), new Date()) }));
  });
  router.put('/weather', allow('weather.enter'), async (request, response) => {
    await typeWeather(accessOf(request), weatherDay.parse(request.body), new Date());
    response.status(204).end();
  });
  router.delete('/weather/:day', allow('weather.enter'), async (request, response) => {
    await forgetWeather(accessOf(request), z.object({ day: isoDate }).parse(request.params).day);
    response.status(204).end();
  });
  router.post('/weather/import', allow('weather.enter'), async (request, response) => {
    response.json(await importWeather(accessOf(request), weatherFile.parse(request.body), new Date()));
  });
  return router;
}
