#pragma once
#define VDDA_MV     3300u
#define ADC_FULL    4095u
#define BATT_RATIO  11u
uint16_t adc_read(uint8_t ch);
