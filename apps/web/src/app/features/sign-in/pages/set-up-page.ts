import { Component } from '@angular/core';

@Component({ selector: 'ts-set-up-page', template: '' })
export class SetUpPage {}
