import { Component } from '@angular/core';

@Component({ selector: 'ts-new-model-page', template: '' })
export class NewModelPage {}
