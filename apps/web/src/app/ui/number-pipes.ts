import { Pipe, type PipeTransform } from '@angular/core';
import { bytes, count, day, duration, fixed, metric, moment, points, share, signed, significant, woe } from './numbers';

type Maybe = number | null | undefined;

/** {{ auc | tsMetric }} three decimals. */
@Pipe({ name: 'tsMetric' })
export class MetricPipe implements PipeTransform {
  transform = (value: Maybe): string => metric(value);
}

/** {{ woe | tsWoe }} two decimals. */
@Pipe({ name: 'tsWoe' })
export class WoePipe implements PipeTransform {
  transform = (value: Maybe): string => woe(value);
}

/** {{ points | tsPoints }} whole points. */
@Pipe({ name: 'tsPoints' })
export class PointsPipe implements PipeTransform {
  transform = (value: Maybe): string => points(value);
}

/** {{ rows | tsCount }} whole, thousands parted. */
@Pipe({ name: 'tsCount' })
export class CountPipe implements PipeTransform {
  transform = (value: Maybe): string => count(value);
}

/** {{ badRate | tsShare }} or {{ badRate | tsShare: 2 }}: per cent. */
@Pipe({ name: 'tsShare' })
export class SharePipe implements PipeTransform {
  transform = (value: Maybe, decimals?: number): string => share(value, decimals);
}

/** {{ x | tsFixed: 4 }} */
@Pipe({ name: 'tsFixed' })
export class FixedPipe implements PipeTransform {
  transform = (value: Maybe, decimals: number): string => fixed(value, decimals);
}

/** {{ difference | tsSigned: 3 }} */
@Pipe({ name: 'tsSigned' })
export class SignedPipe implements PipeTransform {
  transform = (value: Maybe, decimals: number): string => signed(value, decimals);
}

/** {{ penalty | tsSignificant }} three significant digits unless told. */
@Pipe({ name: 'tsSignificant' })
export class SignificantPipe implements PipeTransform {
  transform = (value: Maybe, digits?: number): string => significant(value, digits);
}

@Pipe({ name: 'tsBytes' })
export class BytesPipe implements PipeTransform {
  transform = (value: Maybe): string => bytes(value);
}

@Pipe({ name: 'tsDuration' })
export class DurationPipe implements PipeTransform {
  transform = (seconds: Maybe): string => duration(seconds);
}

/** {{ iso | tsDay }}: "3 November 2026". */
@Pipe({ name: 'tsDay' })
export class DayPipe implements PipeTransform {
  transform = (iso: string | null | undefined): string => day(iso);
}

/** {{ iso | tsMoment }}: "3 Nov 2026, 14:05". */
@Pipe({ name: 'tsMoment' })
export class MomentPipe implements PipeTransform {
  transform = (iso: string | null | undefined): string => moment(iso);
}
