#include <avr/io.h>
#include <stdint.h>

#define RAIL_CH     3

volatile uint16_t rail_mv;

void rail_init(void)
{
    ADMUX = (1 << REFS0) | RAIL_CH;
    ADCSRA = (1 << ADEN) | (1 << ADPS2) | (1 << ADPS1) | (1 << ADPS0);
}

void rail_poll(void)
{
    ADCSRA |= (1 << ADSC);
    while (ADCSRA & (1 << ADSC))
        ;
    rail_mv = (uint16_t)(ADC * 16384UL / 1024);
}
