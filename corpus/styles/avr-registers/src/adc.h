#ifndef ADC_H_
#define ADC_H_
#include <stdint.h>
#define BATT_CH 3
void adc_init(void);
uint16_t adc_read(uint8_t ch);
#endif
