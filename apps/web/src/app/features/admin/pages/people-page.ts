import { Component } from '@angular/core';

@Component({ selector: 'ts-people-page', template: '' })
export class PeoplePage {}
