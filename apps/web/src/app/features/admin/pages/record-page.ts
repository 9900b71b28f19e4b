import { Component } from '@angular/core';

@Component({ selector: 'ts-record-page', template: '' })
export class RecordPage {}
