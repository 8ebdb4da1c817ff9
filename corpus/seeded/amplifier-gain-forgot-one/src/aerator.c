#include <stdint.h>

#define SHUNT_MOHM  10u
#define AMP_GAIN    20u

enum { FEEDER, AERATOR };
extern volatile uint16_t adc_buf[2];

uint32_t aerator_ma(void)
{
    uint32_t dmv = adc_buf[AERATOR] * 30000u / 4096u;

    return dmv * 100u / (SHUNT_MOHM * AMP_GAIN);
}
