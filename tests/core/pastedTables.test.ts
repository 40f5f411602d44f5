import { describe, expect, it } from 'vitest';
import { readTickets } from '../../shared/cellar/ticketTable.ts';
import { splitTicket } from '../../shared/cellar/splitTicket.ts';
import { readWeather } from '../../shared/ripening/weatherTable.ts';
import { heatSince, weatherBefore } from '../../shared/ripening/visitWeather.ts';

describe('a table of weather', () => {
  it('is read with semicolons and decimal commas', () => {
    const read = readWeather('Fecha;Máxima;Mínima;Lluvia\n13/08/2026;31,5;16,2;0\n14/08/2026;29,0;15,1;12,4\n');
    expect(read.problems).toEqual([]);
    expect(read.questions).toEqual([]);
    expect(read.days).toEqual([{ day: '2026-08-13', maxC: 31.5, minC: 16.2, rainMm: 0 }, { day: '2026-08-14', maxC: 29, minC: 15.1, rainMm: 12.4 }]);
    expect(read.columns.map(({ as }) => as)).toEqual(['day', 'maxC', 'minC', 'rainMm']);
  });

  it('is turned from Fahrenheit and inches where the head says so', () => {
    // NIST SP 811: 86 °F is 30 °C; an inch is 25.4 mm.
    const read = readWeather('date,max °F,min °F,rain inches\n2026-08-13,86,50,0.5\n');
    expect(read.units).toBe('us');
    expect(read.days).toEqual([{ day: '2026-08-13', maxC: 30, minC: 10, rainMm: 12.7 }]);
  });

  it('asks what it cannot know: order of dates, decimals, units', () => {
    expect(readWeather('date,max,min\n03/09/2026,28,14\n').questions).toEqual(['dateOrder']);
    expect(readWeather('date;max;min\n2026-09-03;28,500;14,200\n').questions).toEqual(['decimalMark']);
    expect(readWeather('date,max,min\n2026-09-03,84,55\n').questions).toEqual(['units']);
    expect(readWeather('date,max,min\n03/09/2026,28,14\n', { dateOrder: 'mdy' }).days[0]!.day).toBe('2026-03-09');
  });

  it('names the line and the cell that cannot be used', () => {
    const read = readWeather('date,max,min,rain\n2026-09-01,28,14,0\n2026-09-01,28,14,0\n31/31/2026,28,14,0\n2026-09-04,x,14,0\n2026-09-05,12,19,0\n2026-09-06,28,,0\n2026-09-07,28,14,-3\n');
    expect(read.problems).toEqual([
      { code: 'noDay', line: 4, cell: '31/31/2026' },
      { code: 'noNumber', line: 5, cell: 'x' },
      { code: 'swapped', line: 6, cell: '19 / 12' },
      { code: 'halfTemperature', line: 7, cell: '2026-09-06' },
      { code: 'tooWet', line: 8, cell: '-3' },
      { code: 'dayTwice', line: 3, cell: '2026-09-01' },
    ]);
    expect(readWeather('a,b\n1,2\n').problems[0]!.code).toBe('noDayColumn');
    expect(readWeather('date,max\n2026-09-01,20\n').problems[0]!.code).toBe('oneTemperature');
    expect(readWeather('').problems[0]!.code).toBe('empty');
  });
});

describe('a table of weather as stations write it', () => {
  const first = (text: string, answers = {}) => readWeather(text, answers).days[0];

  it('reads each column in its own unit, and asks where °F stands beside rain without one', () => {
    expect(first('date,tmax (°F),tmin (°F),rain (mm)\n2026-09-13,86,59,12\n')).toEqual({ day: '2026-09-13', maxC: 30, minC: 15, rainMm: 12 });
    expect(first('date,tmax (°C),tmin (°C),rain (in)\n2026-09-13,30,15,0.5\n')).toEqual({ day: '2026-09-13', maxC: 30, minC: 15, rainMm: 12.7 });
    const bare = 'date,high °F,low °F,rain\n2026-09-13,86,59,0.5\n';
    expect(readWeather(bare).questions).toEqual(['units']);
    expect(first(bare, { units: 'metric' })!.rainMm).toBe(0.5);
    expect(first(bare, { units: 'us' })!.rainMm).toBe(12.7);
  });

  it('asks of nights that no vineyard has in °C', () => {
    expect(readWeather('date,max,min\n2026-09-13,49,41\n').questions).toEqual(['units']);
  });

  it('never takes wind or humidity for temperature', () => {
    expect(first('date,max wind,humidity min,max temp,min temp\n2026-09-13,55,20,30,15\n')).toMatchObject({ maxC: 30, minC: 15 });
    expect(readWeather('fecha;viento max;hum min\n13/09/2026;55;20\n').problems[0]!.code).toBe('noValueColumn');
  });

  it('finds the head below lines about the station, and units in a line of their own', () => {
    const read = readWeather('Station;Marl Ridge\r\n\r\nDate;TX;TN;RR\r\n;°C;°C;mm\r\n20260901;30,1;15,2;0\r\n20260932;30,1;15,2;0\r\n');
    expect(read.days).toEqual([{ day: '2026-09-01', maxC: 30.1, minC: 15.2, rainMm: 0 }]);
    expect(read.problems).toEqual([{ code: 'noDay', line: 6, cell: '20260932' }]);
  });

  it('leaves days without a figure unknown, and keeps -9 °C', () => {
    const read = readWeather('date,max,min,rain\n2026-01-01,-999,-999,-999\n2026-01-02,M,M,\n2026-01-03,1,-9,T\n');
    expect(read).toMatchObject({ without: 2, problems: [], days: [{ day: '2026-01-03', maxC: 1, minC: -9, rainMm: 0 }] });
    expect(readWeather('date,max,min\n2026-01-01,--,--\n').problems[0]!.code).toBe('empty');
  });
});

describe('weather beside a visit', () => {
  const day = (date: string, maxC: number | null, minC: number | null, rainMm: number | null) => ({ day: date, maxC, minC, rainMm });
  const days = [day('2026-08-30', 41, 20, 30), day('2026-09-01', 30, 14, 4), day('2026-09-02', 36, 18, null), day('2026-09-03', 24, 12, 2)];

  it('adds up rain and takes the greatest heat of the day and the two before', () => {
    expect(weatherBefore(days, '2026-09-03')).toEqual({ rainMm: 6, maxC: 36 });
    expect(weatherBefore(days, '2026-09-20')).toEqual({ rainMm: null, maxC: null });
  });

  it('sums heat from the customary day and counts the days that nobody recorded', () => {
    // 20.5 + 12 + 17 + 8 above 10 °C; 1 April to 3 September are 156 days, four of them known.
    expect(heatSince(days, { south: false, until: '2026-10-31' })).toEqual({ sum: 57.5, from: '2026-04-01', to: '2026-09-03', days: 4, missing: 152 });
    expect(heatSince(days, { south: true, until: '2026-09-30' })!.from).toBe('2025-10-01');
    expect(heatSince([], { south: false, until: '2026-09-03' })).toBeNull();
  });
});

describe('a table of scale tickets', () => {
  const context = { lots: [{ id: 'l1', name: 'Marl red' }, { id: 'l2', name: 'Early rosé' }], known: ['A-1'], season: { startsOn: '2025-12-01', endsOn: '2026-11-30' } };

  it('is read with lots by name, time and net checked', () => {
    const read = readTickets('Ticket no;Lot no;Gross kg;Tare kg;Net kg;Date\nA-2;marl RED;12 400;4 000;8 400;14/09/2026 10:35\nA-3;Early rosé;9000,5;3000;6000,5;2026-09-15\n', context);
    expect(read.problems).toEqual([]);
    expect(read.questions).toEqual([]);
    expect(read.tickets).toMatchObject([{ ticketNo: 'A-2', lotId: 'l1', gross: 12_400, tare: 4000, unit: 'kg', day: '2026-09-14', time: '10:35', netOnly: false }, { ticketNo: 'A-3', gross: 9000.5, time: '12:00' }]);
  });

  it('takes a net weight alone and says so', () => {
    const read = readTickets('ticket,lot,net lb,date\nA-2,Marl red,2000,2026-09-14\n', context);
    expect(read.tickets).toMatchObject([{ gross: 2000, tare: 0, unit: 'lb', netOnly: true }]);
  });

  it('asks for a unit that stands nowhere, and whether 12,400 is twelve thousand', () => {
    expect(readTickets('ticket;lot;gross;tare;date\nA-2;Marl red;12,400;4,000;2026-09-14\n', context).questions).toEqual(['decimalMark', 'unit']);
    expect(readTickets('ticket;lot;gross;tare;date\nA-2;Marl red;12,400;4,000;2026-09-14\n', context, { decimalMark: '.', unit: 'kg' }).tickets[0]!.gross).toBe(12_400);
  });

  it.each(['Ticket', 'Boletín', 'Bon', 'Bolletta', 'Talão'])('finds the column of ticket numbers by the word that the screens of a language have: %s', (title) => {
    expect(readTickets(`${title};lot;net kg;date\nA-2;Marl red;2000;2026-09-14\n`, context).tickets.map(({ ticketNo }) => ticketNo)).toEqual(['A-2']);
  });

  it('refuses what is known, doubled, of no lot, or whose net is wrong', () => {
    const lines = ['A-1,Marl red,900,100,800,2026-09-14', 'A-2,Nowhere,900,100,800,2026-09-14', 'A-3,Marl red,900,100,700,2026-09-14', 'A-4,Marl red,100,900,,2026-09-14', 'A-5,Marl red,900,100,,2026-02-30', 'A-6,Marl red,900,100,,2026-09-14', 'A-6,Marl red,900,100,,2026-09-14'];
    const { problems } = readTickets(`ticket,lot,gross kg,tare,net,date\n${lines.join('\n')}\n`, context);
    expect(problems.map(({ code, line }) => `${code} ${line}`)).toEqual(['known 2', 'unknownLot 3', 'netDiffers 4', 'tareAbove 5', 'noDay 6', 'twice 8']);
  });

  it('refuses a weight below 0, a load that no scale takes, a time and a year that cannot be, and a number that is too long', () => {
    const lines = ['N-1;Marl red;9000;-3000;2026-09-14;', 'N-2;Marl red;-9000;3000;2026-09-14;', 'N-3;Marl red;250000;3000;2026-09-14;', 'N-4;Marl red;9000;3000;2026-09-14;27:10', 'N-5;Marl red;9000;3000;2026-09-14;soon', 'N-6;Marl red;9000;3000;2062-09-14;', `${'N'.repeat(61)};Marl red;9000;3000;2026-09-14;`];
    const { tickets, problems } = readTickets(`ticket;lot;gross kg;tare kg;date;time\n${lines.join('\n')}\n`, context);
    expect(tickets).toEqual([]);
    expect(problems.map(({ code, line }) => [code, line])).toEqual([['noWeight', 2], ['noWeight', 3], ['tooHeavy', 4], ['noTime', 5], ['noTime', 6], ['outOfSeason', 7], ['longNumber', 8]]);
  });

  it('reads hours of half a day, and takes fruit picked after the season’s last day', () => {
    const times = ['2:30 PM', '12:05 a.m.', '12:05 pm', '08:15:30', '7h40', ''];
    const { tickets, problems } = readTickets(`ticket;lot;gross kg;tare kg;date;time\n${times.map((time, at) => `H-${at};Marl red;9000;3000;2027-01-14;${time}`).join('\n')}\n`, context);
    expect(problems).toEqual([]);
    expect(tickets.map(({ time }) => time)).toEqual(['14:30', '00:05', '12:05', '08:15', '07:40', '12:00']);
  });
});

describe('a split of a ticket', () => {
  it('leaves the total as it is', () => {
    expect(splitTicket(1000, [1, 1, 1])).toEqual([334, 333, 333]);
    for (const [net, weights] of [[8437, [3, 5, 9]], [10_000, [0.1, 0.2, 0.7]], [7, [1, 1, 1, 1, 1, 1, 1, 1]], [999.5, [2, 0, 3]]] as const) {
      const parts = splitTicket(net, weights);
      expect(parts.reduce((sum, kg) => sum + kg, 0)).toBeCloseTo(net, 6);
      parts.forEach((kg, index) => expect(Math.abs(kg - (net * weights[index]!) / weights.reduce((sum: number, weight) => sum + weight, 0))).toBeLessThan(1.6));
    }
    expect(splitTicket(500, [0, 4])).toEqual([0, 500]);
    expect(() => splitTicket(500, [0, 0])).toThrow('counts of 0 or more');
  });
});
