import { Component } from '@angular/core';

@Component({ selector: 'ts-inventory-page', template: '' })
export class InventoryPage {}
