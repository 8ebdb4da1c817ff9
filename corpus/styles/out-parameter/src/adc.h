#pragma once
enum adc_input { TANK, SUMP };
enum adc_state { ADC_OK, ADC_BUSY };
enum adc_state adc_get(enum adc_input in, uint16_t *code);
