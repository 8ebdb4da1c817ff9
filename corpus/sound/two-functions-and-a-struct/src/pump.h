#ifndef PUMP_H
#define PUMP_H
#include <stdint.h>

enum { ADC_LEVEL, ADC_PUMP };

struct drive {
    uint32_t pin_dmv;       /* 100 uV */
    int32_t  current_ma;
    uint8_t  running;
};

extern struct drive pump;
uint16_t adc_fetch(int which);
uint32_t pin_dmv(uint16_t code);
#endif
