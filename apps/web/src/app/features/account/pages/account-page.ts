import { Component } from '@angular/core';

@Component({ selector: 'ts-account-page', template: '' })
export class AccountPage {}
