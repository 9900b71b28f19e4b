import { Component } from '@angular/core';

@Component({ selector: 'ts-about-page', template: '' })
export class AboutPage {}
