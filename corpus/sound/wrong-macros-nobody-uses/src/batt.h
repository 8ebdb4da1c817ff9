#pragma once
#include <stdint.h>

#define VREF_MV_OLD         3300    /* first boards */
#define ADC_MAX             1023
#define BATT_RATIO_PROTO    10

#define VREF_MV             3000u
#define ADC_STEPS           4096u
#define BATT_RATIO          11u

enum { ADC_TANK, ADC_BATT };
uint16_t adc_code(int which);
uint32_t batt_mv(void);
