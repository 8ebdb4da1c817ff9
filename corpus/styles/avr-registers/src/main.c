#include <avr/io.h>
#include "adc.h"

static uint16_t batt_mv;

int main(void)
{
    adc_init();
    for (;;) {
        batt_mv = (uint32_t)adc_read(BATT_CH) * 55000UL / 1024;
        PORTB = batt_mv < 11500 ? _BV(PB5) : 0;
    }
}
