import { Component } from '@angular/core';

@Component({ selector: 'ts-sign-in-page', template: '' })
export class SignInPage {}
