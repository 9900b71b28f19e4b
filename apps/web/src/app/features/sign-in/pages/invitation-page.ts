import { Component } from '@angular/core';

@Component({ selector: 'ts-invitation-page', template: '' })
export class InvitationPage {}
