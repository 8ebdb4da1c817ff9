#include <stdint.h>
typedef enum { ADC_TANK, ADC_BUS } adc_id;
uint16_t adc_sample(adc_id id);
